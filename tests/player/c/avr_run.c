/* Firmware for an emulated 8-bit chip: plays TICKS ticks of a table in program memory and says over its serial line, in one
 * line of hexadecimal numbers: the ticks, an FNV-1a hash of their set-points, the most stack below main that was in use while
 * opening, playing and stopping, the most and the mean of a tick's clock cycles. */
#include <avr/interrupt.h>
#include <avr/io.h>
#include <avr/pgmspace.h>
#include <avr/sleep.h>
#define PHW_READ8(p) pgm_read_byte(p)
#define PHW_STORE PROGMEM
#include "one.h"

#define PAINT 0xC5u
#define PRESCALER 8u

extern uint8_t _end; /* of everything that the linker put into RAM: the stack grows down towards it */
static phw_player player;
static uint32_t hash = 2166136261u;

static void mix(uint32_t value) {
    uint8_t index;
    for (index = 0; index < 4u; index++) {
        hash = (hash ^ (uint8_t)value) * 16777619u;
        value >>= 8;
    }
}

static void say(uint32_t value) {
    uint8_t digit;
    for (digit = 0; digit < 9u; digit++) {
        while ((UCSR0A & (1u << UDRE0)) == 0u) {
        }
        UDR0 = digit == 8u ? (uint8_t)' ' : (uint8_t)"0123456789abcdef"[value >> 28];
        value <<= 4;
    }
}

__attribute__((noinline)) static void paint(void) {
    uint8_t *at;
    for (at = &_end; at < (uint8_t *)SP - 2; at++) {
        *at = PAINT;
    }
}

__attribute__((noinline)) static uint16_t deepest(uint16_t top) {
    const uint8_t *at = &_end;
    while (*at == (uint8_t)PAINT) {
        at++;
    }
    return (uint16_t)(top - (uint16_t)at + 1u);
}

__attribute__((noinline)) static bool tick(phw_setpoint *point) {
    return phw_tick(&player, point);
}

__attribute__((noinline)) static void stop(void) {
    phw_stop(&player);
}

int main(void) {
    static phw_setpoint point;
    uint16_t top = SP, opening, most = 0, stack, stopping;
    uint32_t sum = 0, count;
    bool open;
    UCSR0B = 1u << TXEN0;
    TCCR1B = 1u << CS11; /* clock / 8 */
    paint();
    open = phw_open(&player, one_table, one_table_size);
    opening = deepest(top);
    paint();
    for (count = 0; open && count < TICKS; count++) {
        uint16_t start = TCNT1, took;
        if (!tick(&point)) {
            break;
        }
        took = (uint16_t)(TCNT1 - start);
        sum += took;
        most = took > most ? took : most;
        mix(point.a_counts);
        mix(point.b_counts);
        mix((uint32_t)point.a_step);
        mix((uint32_t)point.b_step);
        mix(point.cue);
        mix(point.beam);
    }
    stack = deepest(top);
    paint();
    stop();
    while (tick(&point)) {
    }
    stopping = deepest(top);
    say(count);
    say(hash);
    say(opening);
    say(stack);
    say(stopping);
    say((uint32_t)most * PRESCALER);
    say(count == 0u ? 0u : (uint32_t)((uint64_t)sum * PRESCALER / count));
    while ((UCSR0A & (1u << UDRE0)) == 0u) {
    }
    UDR0 = '\n';
    cli();
    sleep_mode(); /* asleep without interrupts: the emulator ends */
    return 0;
}
