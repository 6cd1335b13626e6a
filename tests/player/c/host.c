/* Plays a table from a file and prints every set-point: a_counts,b_counts,a_step,b_step,beam,cue.
 *
 *   host FILE memory|stream TICKS [STOP]     phw_stop after so many ticks
 *
 * The last line says what phw_state says. Streamed blocks lie in two buffers used in turn, as on a controller; what a
 * buffer held before is overwritten, so that a player that looked at it too late would be found out.
 */
#include "phw_player.h"

#include <stdio.h>
#include <stdlib.h>
#include <string.h>

typedef struct {
    const uint8_t *bytes;
    size_t length;
    uint8_t buffer[2][PHW_BLOCK];
    unsigned turn;
    unsigned late; /* every so often a block is not there yet when it is asked for */
} source;

static const uint8_t *give(void *context, uint32_t offset, uint16_t size) {
    source *from = (source *)context;
    uint8_t *to;
    if (from->late > 0 && offset > 0 && ++from->late % 3 == 0) {
        return NULL;
    }
    if (offset > from->length || size > from->length - offset || size > PHW_BLOCK) {
        return NULL;
    }
    to = from->buffer[from->turn];
    from->turn ^= 1u;
    memset(to, 0xA5, PHW_BLOCK);
    memcpy(to, from->bytes + offset, size);
    return to;
}

static const char *state_name(const phw_player *player) {
    switch (phw_state(player)) {
    case PHW_RUNNING:
        return "running";
    case PHW_ENDED:
        return "ended";
    case PHW_STOPPED:
        return "stopped";
    case PHW_DAMAGED:
        return "damaged";
    default:
        return "unknown";
    }
}

int main(int count, char **words) {
    static source from;
    static phw_player player;
    phw_setpoint point;
    FILE *file;
    uint8_t *bytes;
    long length, ticks, stop, tick;
    bool open;
    if (count < 4) {
        return 2;
    }
    file = fopen(words[1], "rb");
    if (file == NULL || fseek(file, 0, SEEK_END) != 0 || (length = ftell(file)) < 0) {
        return 2;
    }
    rewind(file);
    /* Exactly as long as the table, so that the address sanitizer sees every byte read past it. */
    bytes = (uint8_t *)malloc(length > 0 ? (size_t)length : 1u);
    if (bytes == NULL || fread(bytes, 1, (size_t)length, file) != (size_t)length) {
        return 2;
    }
    fclose(file);
    ticks = atol(words[3]);
    stop = count > 4 ? atol(words[4]) : -1;
    from.bytes = bytes;
    from.length = (size_t)length;
    from.late = 1;
    open = strcmp(words[2], "stream") == 0 ? phw_open_reader(&player, give, &from) : phw_open(&player, bytes, (size_t)length);
    if (!open) {
        printf("closed %s\n", state_name(&player));
        free(bytes);
        return 1;
    }
    for (tick = 0; tick < ticks; tick++) {
        bool more;
        if (tick == stop) {
            phw_stop(&player);
        }
        more = phw_tick(&player, &point);
        printf("%lu,%lu,%ld,%ld,%u,%lu\n", (unsigned long)point.a_counts, (unsigned long)point.b_counts, (long)point.a_step,
               (long)point.b_step, (unsigned)point.beam, (unsigned long)point.cue);
        if (!more) {
            break;
        }
    }
    printf("state %s\n", state_name(&player));
    free(bytes);
    return 0;
}
