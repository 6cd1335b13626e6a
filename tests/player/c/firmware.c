/* Firmware for a Cortex-M that qemu emulates: opens a table, plays it and hands every set-point to the debugger's file.
 *
 * TABLE names the header's identifier, TICKS how many set-points to play. With COUNT nothing is handed out: the run is for
 * counting instructions. */
#include HEADER

#define NAME2(name, part) name##part
#define NAME(name, part) NAME2(name, part)

extern uint32_t stack_top;
int main(void);
void reset(void);

/* Where the core starts: the stack, and what to run. */
__attribute__((section(".vectors"), used)) static const void *const vectors[2] = {&stack_top, (const void *)reset};

/* Semihosting of the ARM architecture: operation in r0, its arguments' address in r1. */
static int32_t ask_debugger(uint32_t operation, const void *arguments) {
    register uint32_t r0 __asm__("r0") = operation;
    register const void *r1 __asm__("r1") = arguments;
    __asm__ volatile("bkpt 0xab" : "+r"(r0) : "r"(r1) : "memory");
    return (int32_t)r0;
}

#define SYS_OPEN 0x01u
#define SYS_WRITE 0x05u
#define SYS_EXIT 0x18u
#define EXIT_GOOD 0x20026u
#define EXIT_BAD 0x20023u

static phw_player player;

#ifndef COUNT
static uint8_t out[24 * 64];
static uint32_t filled;
static int32_t file;

static void put(uint32_t value) {
    uint32_t index;
    for (index = 0; index < 4; index++) {
        out[filled++] = (uint8_t)(value >> (8 * index));
    }
}

static void flush(void) {
    const uint32_t arguments[3] = {(uint32_t)file, (uint32_t)(uintptr_t)out, filled};
    ask_debugger(SYS_WRITE, arguments);
    filled = 0;
}
#endif

/* A function of its own, so that its calls can be told apart. */
__attribute__((noinline)) static bool tick_once(phw_setpoint *point) {
    return phw_tick(&player, point);
}

int main(void) {
    phw_setpoint point;
    uint32_t tick;
#ifndef COUNT
    static const char name[] = "points.bin";
    const uint32_t arguments[3] = {(uint32_t)(uintptr_t)name, 5 /* write, binary */, sizeof name - 1};
    file = ask_debugger(SYS_OPEN, arguments);
#endif
    if (!phw_open(&player, NAME(TABLE, _table), NAME(TABLE, _table_size))) {
        return 1;
    }
    for (tick = 0; tick < TICKS; tick++) {
        if (!tick_once(&point)) {
            break;
        }
#ifndef COUNT
        put(point.a_counts);
        put(point.b_counts);
        put((uint32_t)point.a_step);
        put((uint32_t)point.b_step);
        put(point.cue);
        put(point.beam);
        if (filled == sizeof out) {
            flush();
        }
#endif
    }
#ifndef COUNT
    flush();
#endif
    return phw_state(&player) == PHW_DAMAGED;
}

void reset(void) {
    ask_debugger(SYS_EXIT, (const void *)(uintptr_t)(main() == 0 ? EXIT_GOOD : EXIT_BAD));
    for (;;) {
    }
}

/* What a compiler may call without being asked to. */
void *memset(void *to, int value, size_t size);
void *memset(void *to, int value, size_t size) {
    uint8_t *at = (uint8_t *)to;
    while (size-- > 0) {
        *at++ = (uint8_t)value;
    }
    return to;
}
