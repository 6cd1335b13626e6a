/* Two headers in one program. */
#include "one.h"
#include "other.h"

#include <stdio.h>

int main(void) {
    static phw_player first, second;
    phw_setpoint a, b;
    unsigned tick;
    if (!phw_open(&first, one_table, one_table_size) || !phw_open(&second, other_table, other_table_size)) {
        return 1;
    }
    for (tick = 0; tick < 100; tick++) {
        if (!phw_tick(&first, &a) || !phw_tick(&second, &b)) {
            return 1;
        }
    }
    printf("%08lx %08lx %lu %lu\n", (unsigned long)one_id, (unsigned long)other_id, (unsigned long)a.a_counts, (unsigned long)b.a_counts);
    return sizeof one_table != one_table_size || sizeof other_table != other_table_size;
}
