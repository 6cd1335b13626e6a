/* The streaming sketch of docs/player.md, as printed there, on a line that is as awkward as can be: ticks come while it reads.
 *
 *   stream FILE TICKS MOST       the line takes 1 ... MOST bytes a tick, at random, and the main loop idles at random
 *
 * Every set-point is compared with that of a player that has the same table in memory. Says nothing and returns 0 where all
 * are the same.
 */
#include "streaming.c"

#include <stdio.h>
#include <stdlib.h>
#include <string.h>

static uint8_t *file_bytes;
static size_t file_size;
static phw_player other;
static unsigned long played, wanted;
static uint32_t chance = 1;
static uint32_t most;
static bool ticking;

/* Constants of Numerical Recipes' quick generator, from memory; any would do. */
static uint32_t below(uint32_t bound) {
    chance = chance * 1664525u + 1013904223u;
    return (chance >> 8) % bound;
}

void board_timer(bool on) {
    ticking = on;
}

static void tick(void) {
    phw_setpoint right;
    if (!ticking) {
        return;
    }
    timer_interrupt();
    (void)phw_tick(&other, &right);
    if (phw_state(&player) != phw_state(&other) || point.a_counts != right.a_counts || point.b_counts != right.b_counts ||
        point.a_step != right.a_step || point.b_step != right.b_step || point.beam != right.beam || point.cue != right.cue) {
        printf("tick %lu: state %u, a %lu instead of %lu\n", played, (unsigned)phw_state(&player), (unsigned long)point.a_counts,
               (unsigned long)right.a_counts);
        exit(1);
    }
    if (++played == wanted) {
        exit(0);
    }
}

bool line_read(uint32_t offset, uint8_t *to, uint16_t size) {
    uint16_t index;
    uint32_t until = 1u + below(most);
    /* What the buffer held is gone as soon as the line starts to write. */
    memset(to, 0xA5, size);
    for (index = 0; index < size; index++) {
        if (offset + index >= file_size) {
            return false;
        }
        to[index] = file_bytes[offset + index];
        if (--until == 0u) {
            tick();
            until = 1u + below(most);
        }
    }
    /* Now and then the line gives up at the very end, and has to be asked again. */
    return below(9) != 0u;
}

int main(int count, char **words) {
    FILE *file;
    long size;
    if (count < 4) {
        return 2;
    }
    file = fopen(words[1], "rb");
    if (file == NULL || fseek(file, 0, SEEK_END) != 0 || (size = ftell(file)) <= 0) {
        return 2;
    }
    rewind(file);
    file_size = (size_t)size;
    file_bytes = (uint8_t *)malloc(file_size);
    if (file_bytes == NULL || fread(file_bytes, 1, file_size, file) != file_size) {
        return 2;
    }
    fclose(file);
    wanted = strtoul(words[2], NULL, 10);
    most = (uint32_t)strtoul(words[3], NULL, 10);
    if (!phw_open(&other, file_bytes, file_size)) {
        printf("does not open\n");
        return 1;
    }
    while (!start()) {
        if (phw_state(&player) == PHW_RUNNING) {
            return 1;
        }
    }
    for (;;) {
        fetch();
        if (below(3) == 0u) {
            tick();
        }
    }
}
