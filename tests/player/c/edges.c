/* Players at the edges of their life: edges FILE says nothing and returns 0 where all is as it has to be. */
#include "phw_player.h"

#include <stdio.h>
#include <stdlib.h>

#define NEED(fact)                                       \
    do {                                                 \
        if (!(fact)) {                                   \
            printf("line %d: %s\n", __LINE__, #fact);    \
            return 1;                                    \
        }                                                \
    } while (0)

static uint8_t bytes[1u << 20];
static size_t length;

/* A player that nobody opened has nothing to play, whatever it is asked. */
static int unopened(void) {
    static phw_player first, second;
    phw_setpoint point;
    NEED(phw_state(&first) == PHW_DAMAGED);
    NEED(!phw_tick(&first, &point) && point.beam == 0 && point.a_step == 0 && point.b_step == 0);
    phw_stop(&first);
    NEED(phw_state(&first) == PHW_DAMAGED);
    NEED(!phw_tick(&first, &point) && point.beam == 0);
    phw_stop(&second);
    NEED(!phw_tick(&second, &point) && phw_state(&second) == PHW_DAMAGED);
    return 0;
}

/* A stop before the first tick: both rotors stand already. */
static int stopped_at_once(void) {
    static phw_player player;
    phw_setpoint point;
    NEED(phw_open(&player, bytes, length) && phw_state(&player) == PHW_RUNNING);
    phw_stop(&player);
    NEED(phw_state(&player) == PHW_STOPPED);
    NEED(!phw_tick(&player, &point) && point.beam == 0 && point.a_step == 0 && point.b_step == 0);
    NEED(point.a_counts == 0 && point.b_counts == 0);
    /* A second stop changes nothing, and a table that is opened again runs. */
    phw_stop(&player);
    NEED(phw_state(&player) == PHW_STOPPED);
    NEED(phw_open(&player, bytes, length) && phw_tick(&player, &point) && phw_state(&player) == PHW_RUNNING);
    return 0;
}

static phw_player streaming;

/* Blocks lie in memory, but the later ones are given only where so few ticks of the one before are left. */
static const uint8_t *give_late(void *context, uint32_t offset, uint16_t size) {
    const uint32_t *left = (const uint32_t *)context;
    if (offset > length || size > length - offset || (phw_state(&streaming) == PHW_RUNNING && streaming.block_left > *left)) {
        return NULL;
    }
    return bytes + offset;
}

/* A block that comes late is checked in the ticks that are left, about as much in each, and none of it where it is due. */
static int spread(void) {
    static const uint32_t late[4] = {1000, 100, 20, 1};
    unsigned which;
    for (which = 0; which < 4u; which++) {
        uint32_t left = late[which];
        unsigned long tick;
        unsigned blocks = 0;
        NEED(phw_open_reader(&streaming, give_late, &left));
        for (tick = 0; tick < 20000u; tick++) {
            phw_setpoint point;
            uint32_t before = streaming.block_left;
            uint16_t checked = streaming.ahead == NULL ? 4u : streaming.checked;
            NEED(phw_tick(&streaming, &point) && phw_state(&streaming) == PHW_RUNNING);
            if (streaming.block_left + 1u == before && streaming.ahead != NULL) {
                uint32_t most = streaming.largest / left + 2u;
                NEED((uint32_t)(streaming.checked - checked) <= (most > PHW_CHECK ? most : PHW_CHECK));
            }
            if (streaming.block_left == 0u) {
                uint32_t next;
                NEED(streaming.ahead != NULL && streaming.checked == phw_next(&streaming, &next));
                blocks++;
            }
        }
        NEED(blocks > 2u);
    }
    return 0;
}

int main(int count, char **words) {
    FILE *file = count > 1 ? fopen(words[1], "rb") : NULL;
    if (file == NULL) {
        return 2;
    }
    length = fread(bytes, 1, sizeof bytes, file);
    fclose(file);
    return unopened() != 0 || stopped_at_once() != 0 || spread() != 0;
}
