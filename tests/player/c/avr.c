/* The player on an 8-bit chip, its table in program memory. */
#include <avr/pgmspace.h>
#define PHW_READ8(p) pgm_read_byte(p)
#define PHW_STORE PROGMEM
#include "one.h"

static phw_player player;
static volatile phw_setpoint point;

int main(void) {
    phw_setpoint now;
    if (!phw_open(&player, one_table, one_table_size)) {
        return 1;
    }
    while (phw_tick(&player, &now)) {
        point = now;
    }
    phw_stop(&player);
    return 0;
}
