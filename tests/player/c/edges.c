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

int main(int count, char **words) {
    FILE *file = count > 1 ? fopen(words[1], "rb") : NULL;
    if (file == NULL) {
        return 2;
    }
    length = fread(bytes, 1, sizeof bytes, file);
    fclose(file);
    return unopened() != 0 || stopped_at_once() != 0;
}
