/* The player of phasewright tables: one set-point a tick, from rows or from knots.
 *
 * C99 and C++17; no heap, no floating point, no recursion, nothing but the three headers below.
 *
 *   phw_player player;
 *   phw_setpoint point;
 *   if (phw_open(&player, evening_table, evening_table_size)) {
 *       while (phw_tick(&player, &point)) {  once a tick, from the timer's interrupt
 *           ...
 *       }
 *   }
 *
 * PHW_READ8(p)  reads one byte of a table in memory; define it beforehand on a chip that keeps constants apart from memory.
 * PHW_STORE     stands after the table's name in its definition; define it together with PHW_READ8.
 *
 * Lasers blind and rotors break: the beam needs a shutter that does not depend on this program, and phw_stop is no emergency
 * stop. It leaves a still beam wherever the laser does not obey, heeds neither jerk nor torque, and needs a running timer.
 * Nothing here is a clearance; local rules and a competent person decide.
 *
 * The layout of a table is described in docs/pack.md, the use of the player in docs/player.md.
 */
#ifdef PHW_PLAYER
#if PHW_PLAYER != 2
#error "tables with players of different versions in one program: let one version of phasewright write both"
#endif
#else
/* The version of this player; a header with another one does not go into the same program. */
#define PHW_PLAYER 2

#include <stdbool.h>
#include <stddef.h>
#include <stdint.h>

#ifndef PHW_READ8
#define PHW_READ8(p) (*(const uint8_t *)(p))
#endif
#ifndef PHW_STORE
#define PHW_STORE
#endif
/* Bytes of the largest block that a streaming player takes; phasewright writes none larger. */
#ifndef PHW_BLOCK
#define PHW_BLOCK 1024u
#endif
/* No table has larger ones. */
#define PHW_MOST_BLOCK 4096u
#if PHW_BLOCK < 1024u || PHW_BLOCK > 4096u
#error "PHW_BLOCK is at least 1024, since every table says that its blocks may have so many bytes, and at most 4096"
#endif

/* Functions that are never merged into their callers, so that the stack holds one of them at a time. */
#if defined(__GNUC__)
#define PHW_APART static __attribute__((noinline, unused))
#else
#define PHW_APART static inline
#endif

/* What a player is doing. A player that is all zero, since nobody has opened it, has nothing to play. */
enum {
    PHW_DAMAGED = 0, /* the table is not whole, or not opened; it may still be slowing down */
    PHW_RUNNING = 1, /* playing */
    PHW_ENDED = 2,   /* the table has come to its end */
    PHW_STOPPED = 3  /* phw_stop was called; it may still be slowing down */
};

/* The set-point of one tick. */
typedef struct {
    uint32_t a_counts; /* position of rotor a at this tick, 0 ... counts of a turn - 1 */
    uint32_t b_counts; /* position of rotor b */
    int32_t a_step;    /* counts that a moves until the next tick */
    int32_t b_step;    /* counts that b moves until the next tick */
    uint32_t cue;      /* 0 in the run-up, then the number of the cue */
    uint8_t beam;      /* level of the laser, 0 ... 255 */
} phw_setpoint;

/* Gives `size` bytes of the table from `offset` on, or NULL where they are not there (yet). What it gave must stay as
 * it is until the block after the next one has been given: two buffers of PHW_BLOCK bytes, used in turn, are enough. */
typedef const uint8_t *(*phw_read)(void *context, uint32_t offset, uint16_t size);

/* One rotor. Phases, speeds and changes are in units of 2^-32 counts, as two's complement numbers. */
typedef struct {
    uint64_t phase;
    uint64_t speed;
    uint64_t change;
    uint64_t brake;  /* deceleration a tick squared */
    uint32_t counts; /* of a turn */
    uint32_t left;   /* ticks of this piece after the present one */
    int32_t step;    /* of the set-point given last */
    int32_t moved;   /* the same without what a new piece or block adds */
    uint32_t before; /* counts at the next tick, seen from the piece or block before it */
    uint8_t scale;   /* changes grow in steps of 2^scale */
    uint8_t grain;   /* phases shift in steps of 2^grain */
    uint8_t pace;    /* most pieces take a multiple of 2^pace ticks */
} phw_rotor;

/* A player. Its fields are its own business. */
typedef struct {
    const uint8_t *block; /* the block being played */
    const uint8_t *ahead; /* streaming: the next block, while it is checked */
    const uint8_t *bytes; /* the whole table; NULL when streaming */
    phw_read read;        /* NULL where the table is in memory */
    void *context;
    phw_rotor rotor[2];
    uint64_t tick;       /* of the next set-point */
    uint64_t total;      /* ticks of the table */
    uint64_t loop_tick;  /* at which the loop starts */
    uint32_t offset;     /* of the block being played */
    uint32_t block_left; /* its ticks after the next set-point's */
    uint32_t loop_offset;
    uint32_t run_left; /* rows: of the run; knots: ticks after this one until beam or cue change; stopping: ticks left */
    uint32_t cue;
    uint32_t old_cue; /* of the set-point given last */
    uint32_t crc;
    uint16_t at;   /* next byte of the block */
    uint16_t size; /* of the block */
    uint16_t next_size;
    uint16_t loop_size;
    uint16_t checked; /* bytes of `ahead` that the checksum has seen */
    uint16_t largest;
    uint8_t state;
    uint8_t beam;
    bool knots;
    bool looped;
    bool moving; /* there is a set-point to come */
    bool broken; /* a read went past the end of a block */
} phw_player;

/* Bytes of a table that a streaming player checks at every tick. */
#define PHW_CHECK 4u

/* The high word of a phase as a signed number of counts. */
static inline int32_t phw_whole(uint64_t value) {
    return (int32_t)(uint32_t)(value >> 32);
}

/* CRC-32 (IEEE 802.3, reflected) going on from `crc`, without the final inversion. */
static inline uint32_t phw_crc(uint32_t crc, uint8_t byte) {
    uint8_t bit;
    crc ^= byte;
    for (bit = 0; bit < 8u; bit++) {
        crc = (crc >> 1) ^ ((crc & 1u) != 0u ? 0xEDB88320u : 0u);
    }
    return crc;
}

static inline uint8_t phw_at(const phw_player *player, const uint8_t *from, uint16_t at) {
    /* What a reader gave lies in ordinary memory, whatever PHW_READ8 is. */
    return player->read != NULL ? from[at] : (uint8_t)PHW_READ8(from + at);
}

static inline uint32_t phw_u32(const phw_player *player, const uint8_t *from, uint16_t at) {
    uint32_t value = 0;
    uint8_t index;
    for (index = 4; index > 0u; index--) {
        value = (value << 8) | phw_at(player, from, (uint16_t)(at + index - 1u));
    }
    return value;
}

static inline uint16_t phw_u16(const phw_player *player, const uint8_t *from, uint16_t at) {
    return (uint16_t)(phw_at(player, from, at) | ((uint16_t)phw_at(player, from, (uint16_t)(at + 1u)) << 8));
}

static inline uint64_t phw_u64(const phw_player *player, const uint8_t *from, uint16_t at) {
    return phw_u32(player, from, at) | ((uint64_t)phw_u32(player, from, (uint16_t)(at + 4u)) << 32);
}

/* The next byte of the block; 0, and the block is broken, past its end. */
static inline uint8_t phw_byte(phw_player *player) {
    if (player->at >= player->size) {
        player->broken = true;
        return 0;
    }
    return phw_at(player, player->block, player->at++);
}

/* An unsigned number in groups of seven bits, the highest first; every byte but the last has its top bit set. */
PHW_APART uint64_t phw_unsigned(phw_player *player) {
    uint64_t value = 0;
    uint8_t groups = 10;
    for (;;) {
        uint8_t byte = phw_byte(player);
        value |= byte & 0x7Fu;
        if ((byte & 0x80u) == 0u) {
            return value;
        }
        /* No more than ten groups, and no more than 64 bits. */
        if (--groups == 0u || (uint8_t)(value >> 56) > 1u) {
            player->broken = true;
            return 0;
        }
        value <<= 7;
    }
}

/* A signed number as two's complement: 0, 1, 2, 3 ... stand for 0, -1, 1, -2 ... */
static inline uint64_t phw_sign(uint64_t value) {
    return (value >> 1) ^ ((value & 1u) != 0u ? UINT64_MAX : 0u);
}

static inline uint64_t phw_signed(phw_player *player) {
    return phw_sign(phw_unsigned(player));
}

/* A number of at most 32 bits. */
static inline uint32_t phw_unsigned32(phw_player *player) {
    uint64_t value = phw_unsigned(player);
    if (value > UINT32_MAX) {
        player->broken = true;
    }
    return (uint32_t)value;
}

/* A shift that a 64-bit number bears. */
static inline uint8_t phw_shift(phw_player *player) {
    uint8_t shift = phw_byte(player);
    if (shift > 63u) {
        player->broken = true;
        return 0;
    }
    return shift;
}

/* Brings the counts of a phase that has left its turn back into it. */
PHW_APART void phw_back(phw_rotor *rotor) {
    int32_t at = phw_whole(rotor->phase);
    if (at < 0) {
        at += (int32_t)rotor->counts;
    } else {
        at -= (int32_t)rotor->counts;
    }
    if (at < 0 || (uint32_t)at >= rotor->counts) {
        at %= (int32_t)rotor->counts;
        if (at < 0) {
            at += (int32_t)rotor->counts;
        }
    }
    rotor->phase = ((uint64_t)(uint32_t)at << 32) | (uint32_t)rotor->phase;
}

/* Keeps the counts of a phase within one turn. A turn has at most 2^30 of them, so that this also finds what is below 0. */
static inline void phw_wrap(phw_rotor *rotor) {
    if ((uint32_t)phw_whole(rotor->phase) >= rotor->counts) {
        phw_back(rotor);
    }
}

/* Takes a rotor as the head of a block states it; whether it can be. */
PHW_APART bool phw_rotor_state(phw_player *player, phw_rotor *rotor) {
    uint32_t counts = phw_unsigned32(player);
    uint32_t fraction = 0;
    uint8_t index;
    if (counts >= rotor->counts) {
        return false;
    }
    for (index = 0; index < 4u; index++) {
        fraction |= (uint32_t)phw_byte(player) << (8u * index);
    }
    rotor->phase = ((uint64_t)counts << 32) | fraction;
    rotor->speed = phw_signed(player);
    rotor->change = phw_signed(player);
    rotor->scale = phw_shift(player);
    rotor->grain = phw_shift(player);
    rotor->pace = phw_shift(player);
    rotor->left = phw_unsigned32(player);
    return true;
}

/* Rows: takes the next row; the beam and the cue where a new run starts. */
PHW_APART void phw_row(phw_player *player) {
    uint8_t byte;
    uint8_t index;
    if (player->run_left == 0u) {
        player->run_left = phw_unsigned32(player);
        player->beam = phw_byte(player);
        player->cue = phw_unsigned32(player);
        /* No run of nothing, and none of more than the block has. */
        if (player->run_left - 1u > player->block_left) {
            player->broken = true;
            return;
        }
    }
    player->run_left--;
    byte = phw_byte(player);
    for (index = 0; index < 2u; index++) {
        uint8_t narrow = index == 0u ? (uint8_t)(byte >> 4) : (uint8_t)(byte & 15u);
        uint64_t change = narrow < 15u ? (uint64_t)narrow - 7u : phw_signed(player);
        player->rotor[index].speed += change << 32;
    }
}

/* Takes both rotors of a block of rows: positions, and the step that the first row's is counted from. */
PHW_APART bool phw_row_state(phw_player *player) {
    uint8_t index;
    for (index = 0; index < 2u; index++) {
        uint32_t counts = phw_unsigned32(player);
        if (counts >= player->rotor[index].counts) {
            return false;
        }
        player->rotor[index].phase = (uint64_t)counts << 32;
        player->rotor[index].change = 0;
    }
    player->rotor[0].speed = phw_signed(player) << 32;
    player->rotor[1].speed = phw_signed(player) << 32;
    player->run_left = 0;
    return true;
}

/* Reads the head of a block that stands at `player->block`, its checksum already checked, and leaves the player at the
 * first byte after it; false where it cannot be, or does not start at the tick that the player has come to. */
PHW_APART bool phw_block_head(phw_player *player) {
    uint8_t flags = phw_at(player, player->block, 8);
    uint64_t after;
    player->at = 9;
    player->broken = false;
    if (phw_u16(player, player->block, 4) != player->size || (flags & 0xFEu) != 0u) {
        return false;
    }
    player->next_size = phw_u16(player, player->block, 6);
    if (phw_unsigned(player) != player->tick) {
        return false;
    }
    player->block_left = phw_unsigned32(player);
    if (((flags & 1u) != 0u) != (player->looped && player->tick == player->loop_tick)) {
        return false;
    }
    if ((flags & 1u) != 0u) {
        player->loop_offset = player->offset;
        player->loop_size = player->size;
    }
    /* The block does not run past the end, and it is the last exactly where it comes to it. */
    after = player->total - player->tick - 1u;
    return !player->broken && player->block_left <= after && (player->next_size == 0u) == (player->block_left == after);
}

/* Whether the checksum of `size` bytes is right, `checked` of which (from byte 4 on) `crc` has already seen. */
PHW_APART bool phw_whole_block(const phw_player *player, const uint8_t *from, uint16_t size, uint16_t checked, uint32_t crc) {
    for (; checked < size; checked++) {
        crc = phw_crc(crc, phw_at(player, from, checked));
    }
    return phw_u32(player, from, 0) == (crc ^ UINT32_MAX);
}

/* The smallest block: checksum, sizes, flags, two numbers. */
#define PHW_LEAST_BLOCK 11u

/* Where the block after the present one is, and how large; size 0: nowhere. */
static inline uint16_t phw_next(const phw_player *player, uint32_t *offset) {
    if (player->next_size != 0u) {
        *offset = player->offset + player->size;
        return player->next_size;
    }
    *offset = player->loop_offset;
    return player->looped ? player->loop_size : 0u;
}

/* Streaming: asks for the next block and checks a few bytes of it; more where it came so late that a few would not do. */
PHW_APART void phw_look_ahead(phw_player *player) {
    uint16_t until;
    uint16_t few = PHW_CHECK;
    uint32_t offset = 0;
    uint16_t size = phw_next(player, &offset);
    if (size < PHW_LEAST_BLOCK || size > player->largest) {
        return;
    }
    if (player->ahead == NULL) {
        player->ahead = player->read(player->context, offset, size);
        player->checked = 4;
        player->crc = UINT32_MAX;
        return;
    }
    until = (uint16_t)(size - player->checked);
    if (player->block_left < until / PHW_CHECK) {
        few = (uint16_t)(until / (uint16_t)(player->block_left + 1u) + 1u);
    }
    until = until > few ? (uint16_t)(player->checked + few) : size;
    for (; player->checked < until; player->checked++) {
        player->crc = phw_crc(player->crc, player->ahead[player->checked]);
    }
}

/* Goes to the block after the present one, or from the last one back to the loop; false where it is not whole. */
PHW_APART bool phw_enter(phw_player *player) {
    uint32_t offset = 0;
    uint16_t size = phw_next(player, &offset);
    /* A block is used up exactly when its ticks are. */
    if (size < PHW_LEAST_BLOCK || size > player->largest || (player->block != NULL && player->at != player->size)) {
        return false;
    }
    if (player->read != NULL) {
        if (player->ahead == NULL) {
            phw_look_ahead(player);
        }
        if (player->ahead == NULL || !phw_whole_block(player, player->ahead, size, player->checked, player->crc)) {
            return false;
        }
        player->block = player->ahead;
        player->ahead = NULL;
    } else {
        player->block = player->bytes + offset;
    }
    player->offset = offset;
    player->size = size;
    if (player->tick == player->total) {
        player->tick = player->loop_tick;
    }
    return true;
}

/* Takes beam and cue as the head of a block of knots states them. */
PHW_APART void phw_event_state(phw_player *player) {
    player->beam = phw_byte(player);
    player->cue = phw_unsigned32(player);
    player->run_left = phw_unsigned32(player);
}

/* Knots: takes the next piece of a rotor, whose change counts from its first tick on; false where it is one that is set anew, which phw_set takes. */
PHW_APART bool phw_piece(phw_player *player, phw_rotor *rotor) {
    uint64_t value = phw_unsigned(player);
    uint64_t change;
    if (value == 0u) {
        return false;
    }
    if (value > ((uint64_t)1 << 32) >> rotor->pace) {
        player->broken = true;
    }
    rotor->left = (uint32_t)((value << rotor->pace) - 1u);
    value = phw_unsigned(player);
    change = phw_sign(value >> 1) << rotor->scale;
    rotor->change += change;
    rotor->speed += change;
    if ((value & 1u) != 0u) {
        rotor->phase += phw_signed(player) << rotor->grain;
    }
    return true;
}

/* Knots: takes a piece that is set anew. */
PHW_APART void phw_set(phw_player *player, phw_rotor *rotor) {
    uint8_t what = phw_byte(player);
    uint8_t shift;
    uint64_t change = 0;
    rotor->left = phw_unsigned32(player);
    if ((what & 1u) != 0u) {
        shift = phw_shift(player);
        rotor->phase = (rotor->phase & ~(uint64_t)UINT32_MAX) + (phw_signed(player) << shift);
    }
    if ((what & 2u) != 0u) {
        shift = phw_shift(player);
        rotor->speed = phw_signed(player) << shift;
    }
    if ((what & 4u) != 0u) {
        rotor->scale = phw_shift(player);
        rotor->grain = phw_shift(player);
        rotor->pace = phw_shift(player);
    }
    if ((what & 8u) != 0u) {
        change = phw_signed(player) << rotor->scale;
    }
    if ((what & 2u) == 0u) {
        rotor->speed += change - rotor->change;
    }
    rotor->change = change;
    if ((what & 0xF0u) != 0u) {
        player->broken = true;
    }
}

/* Knots: takes the next beam or cue. */
PHW_APART void phw_event(phw_player *player) {
    uint64_t head = phw_unsigned(player);
    if ((head & 1u) != 0u) {
        player->beam = phw_byte(player);
    }
    if ((head & 2u) != 0u) {
        player->cue += (uint32_t)phw_signed(player);
    }
    head >>= 2;
    player->run_left = (uint32_t)head;
    if (head > UINT32_MAX) {
        player->broken = true;
    }
}

/* Moves a rotor to the next tick; gives the step. */
static inline int32_t phw_move(phw_rotor *rotor) {
    uint32_t before = (uint32_t)phw_whole(rotor->phase);
    int32_t step;
    rotor->phase += rotor->speed;
    rotor->speed += rotor->change;
    step = (int32_t)((uint32_t)phw_whole(rotor->phase) - before);
    phw_wrap(rotor);
    return step;
}

/* over / under, rounded down, or up as ticks of slowing down are; under is below 2^63. Bit by bit: it is needed once, and takes
 * no library.
 *
 * Up: `under` is the deceleration d in 2^-32 counts a tick squared, rounded down, so d < under + 1, and over = q * under + rest.
 * over > q * d, so that q + 1 ticks are due, is sure where rest >= q, since q * d < q * under + q. A rest below q is what the
 * rounding down leaves where over = q * d, and q ticks are due. It cannot be anything else where d is a fraction of counts
 * with a denominator below 2^32 / q: over / q - d is then 0 or at least 1 / (denominator * q) counts > 2^-32 counts. With a
 * larger denominator q ticks may be taken for q + 1; each rotor then loses less than 2^-32 counts a tick squared too much. */
PHW_APART uint64_t phw_divide(uint64_t over, uint64_t under, bool up) {
    uint64_t rest = 0;
    uint8_t bit;
    for (bit = 0; bit < 64u; bit++) {
        rest = (rest << 1) | (over >> 63);
        over <<= 1;
        if (rest >= under) {
            rest -= under;
            over |= 1u;
        }
    }
    return up && rest != 0u && rest >= over ? over + 1u : over;
}

/* The size of a step in 2^-32 counts. */
static inline uint64_t phw_size(int32_t step) {
    return (uint64_t)(step < 0 ? 0u - (uint32_t)step : (uint32_t)step) << 32;
}

/* Turns the beam off and slows both rotors down from the next tick on, so that they come to rest together. */
PHW_APART void phw_brake(phw_player *player, uint8_t state) {
    uint8_t index;
    if (player->state != PHW_RUNNING) {
        return;
    }
    player->state = state;
    player->beam = 0;
    player->run_left = 0;
    for (index = 0; index < 2u; index++) {
        phw_rotor *rotor = &player->rotor[index];
        rotor->change = phw_divide(phw_size(rotor->step), rotor->brake, true);
        if (rotor->change > UINT32_MAX) {
            rotor->change = UINT32_MAX;
        }
        if (rotor->change > player->run_left) {
            player->run_left = (uint32_t)rotor->change;
        }
    }
    player->moving = player->run_left != 0u;
    for (index = 0; index < 2u && player->moving; index++) {
        phw_rotor *rotor = &player->rotor[index];
        rotor->phase = (rotor->phase & ~(uint64_t)UINT32_MAX) | 0x80000000u;
        rotor->speed = phw_size(rotor->step);
        rotor->change = 0u - phw_divide(rotor->speed, player->run_left, false);
        if (rotor->step < 0) {
            rotor->speed = 0u - rotor->speed;
            rotor->change = 0u - rotor->change;
        }
        rotor->speed += rotor->change;
    }
}

/* While slowing down: the steps of this tick. */
PHW_APART void phw_slow(phw_player *player) {
    uint8_t index;
    player->run_left--;
    for (index = 0; index < 2u; index++) {
        phw_rotor *rotor = &player->rotor[index];
        /* The last of the ticks is at rest, whatever the division has left. */
        rotor->step = player->run_left != 0u ? phw_move(rotor) : 0;
    }
    player->moving = player->run_left != 0u;
}

/* Makes a step longer; what no table that is whole can overflow wraps round. */
static inline void phw_add(phw_rotor *rotor, uint32_t more) {
    rotor->step = (int32_t)((uint32_t)rotor->step + more);
}

/* The way from where a rotor was expected to where a block says it is: the nearest. */
static inline int32_t phw_gap(const phw_rotor *rotor) {
    int32_t gap = (int32_t)((uint32_t)phw_whole(rotor->phase) - rotor->before);
    if (gap > (int32_t)(rotor->counts / 2u)) {
        gap -= (int32_t)rotor->counts;
    } else if (gap < -(int32_t)((rotor->counts - 1u) / 2u)) {
        gap += (int32_t)rotor->counts;
    }
    return gap;
}

/* Moves both rotors to the next tick. */
PHW_APART void phw_advance(phw_player *player) {
    uint8_t index;
    for (index = 0; index < 2u; index++) {
        phw_rotor *rotor = &player->rotor[index];
        rotor->moved = phw_move(rotor);
        rotor->step = rotor->moved;
        rotor->before = (uint32_t)phw_whole(rotor->phase);
    }
    player->tick++;
}

/* Knots: the pieces and the event that are due at the next tick. */
PHW_APART void phw_take(phw_player *player) {
    uint8_t index;
    for (index = 0; index < 2u; index++) {
        phw_rotor *rotor = &player->rotor[index];
        if (rotor->left != 0u) {
            rotor->left--;
        } else {
            if (!phw_piece(player, rotor)) {
                phw_set(player, rotor);
            }
            phw_add(rotor, (uint32_t)phw_whole(rotor->phase) - rotor->before);
            phw_wrap(rotor);
        }
    }
    if (player->run_left != 0u) {
        player->run_left--;
    } else {
        phw_event(player);
    }
}

/* Everything that the head of a block states; with rows the first of them too. */
static inline bool phw_block_state(phw_player *player) {
    if (!phw_block_head(player)) {
        return false;
    }
    if (player->knots) {
        if (!phw_rotor_state(player, &player->rotor[0]) || !phw_rotor_state(player, &player->rotor[1])) {
            return false;
        }
        phw_event_state(player);
    } else {
        if (!phw_row_state(player)) {
            return false;
        }
        phw_row(player);
    }
    return !player->broken;
}

/* Nothing that a damaged block says is followed. */
PHW_APART void phw_fail(phw_player *player) {
    uint8_t index;
    for (index = 0; index < 2u; index++) {
        phw_rotor *rotor = &player->rotor[index];
        rotor->phase = (uint64_t)rotor->before << 32;
        rotor->step = rotor->moved;
    }
    player->cue = player->old_cue;
    phw_brake(player, PHW_DAMAGED);
}

/* While playing: the steps of this tick, and everything made ready for the next. */
static inline void phw_go_on(phw_player *player) {
    player->old_cue = player->cue;
    phw_advance(player);
    if (player->block_left != 0u) {
        player->block_left--;
        if (player->knots) {
            phw_take(player);
        } else {
            phw_row(player);
        }
    } else if (player->tick == player->total && !player->looped) {
        if (player->at == player->size) {
            player->state = PHW_ENDED;
            player->moving = false;
            return;
        }
        player->broken = true;
    } else if (!phw_enter(player) || !phw_block_state(player)) {
        player->broken = true;
    } else {
        phw_add(&player->rotor[0], (uint32_t)phw_gap(&player->rotor[0]));
        phw_add(&player->rotor[1], (uint32_t)phw_gap(&player->rotor[1]));
    }
    if (player->broken) {
        phw_fail(player);
    } else if (player->read != NULL) {
        phw_look_ahead(player);
    }
}

/* Gives the set-point of the next tick and goes on; false from the end on: then both rotors stand and the beam is off. */
static inline bool phw_tick(phw_player *player, phw_setpoint *point) {
    bool moving = player->moving;
    bool playing = moving && player->state == PHW_RUNNING;
    point->a_counts = (uint32_t)phw_whole(player->rotor[0].phase);
    point->b_counts = (uint32_t)phw_whole(player->rotor[1].phase);
    point->cue = player->cue;
    point->beam = playing ? player->beam : 0u;
    if (playing) {
        phw_go_on(player);
    } else if (moving) {
        phw_slow(player);
    } else {
        player->rotor[0].step = 0;
        player->rotor[1].step = 0;
    }
    point->a_step = player->rotor[0].step;
    point->b_step = player->rotor[1].step;
    return moving;
}

/* PHW_DAMAGED, PHW_RUNNING, PHW_ENDED or PHW_STOPPED. */
static inline uint8_t phw_state(const phw_player *player) {
    return player->state;
}

/* Beam off for good; from the next tick on both rotors slow down and come to rest together, in their ratio. */
static inline void phw_stop(phw_player *player) {
    phw_brake(player, PHW_STOPPED);
}

/* Bytes of the head that every version has, the titles left out, and of the smallest whole head. */
#define PHW_HEAD 100u
#define PHW_LEAST_HEAD 106u

/* Everything as it is before a table is read: nothing to play. */
PHW_APART void phw_clear(phw_player *player) {
    uint8_t index;
    player->block = NULL;
    player->ahead = NULL;
    player->bytes = NULL;
    player->read = NULL;
    player->context = NULL;
    for (index = 0; index < 2u; index++) {
        phw_rotor *rotor = &player->rotor[index];
        rotor->phase = rotor->speed = rotor->change = 0;
        rotor->brake = 1;
        rotor->counts = 1;
        rotor->left = 0;
        rotor->step = rotor->moved = 0;
        rotor->before = 0;
        rotor->scale = rotor->grain = rotor->pace = 0;
    }
    player->tick = player->total = player->loop_tick = 0;
    player->offset = player->block_left = player->loop_offset = player->run_left = 0;
    player->cue = player->old_cue = 0;
    player->crc = UINT32_MAX;
    player->at = player->size = player->next_size = player->loop_size = player->checked = player->largest = 0;
    player->state = PHW_DAMAGED;
    player->beam = 0;
    player->knots = player->looped = player->moving = player->broken = false;
}

/* Reads the head of a table from `from`, `size` bytes long, and checks it. */
PHW_APART bool phw_head(phw_player *player, const uint8_t *from, uint16_t size) {
    uint8_t index;
    uint8_t flags = phw_at(player, from, 6);
    uint16_t at;
    uint32_t crc = UINT32_MAX;
    for (at = 0; at < size - 4u; at++) {
        crc = phw_crc(crc, phw_at(player, from, at));
    }
    if (phw_u32(player, from, (uint16_t)(size - 4u)) != (crc ^ UINT32_MAX)) {
        return false;
    }
    if (phw_at(player, from, 5) > 1u || (flags & 0xFEu) != 0u) {
        return false;
    }
    player->knots = phw_at(player, from, 5) == 1u;
    player->looped = (flags & 1u) != 0u;
    player->next_size = phw_u16(player, from, 10);
    player->largest = phw_u16(player, from, 12);
    player->total = phw_u64(player, from, 20);
    player->loop_tick = phw_u64(player, from, 28);
    for (index = 0; index < 2u; index++) {
        phw_rotor *rotor = &player->rotor[index];
        at = (uint16_t)(56u + 22u * index);
        rotor->counts = phw_u32(player, from, at);
        rotor->brake = phw_u64(player, from, (uint16_t)(at + 4u));
        if (rotor->counts == 0u || rotor->counts > 0x40000000u || rotor->brake == 0u || rotor->brake >> 62 != 0u) {
            return false;
        }
    }
    /* The first block stands after the head. */
    player->offset = 0;
    player->size = size;
    return player->largest <= PHW_MOST_BLOCK && player->total != 0u && (!player->looped || player->loop_tick < player->total);
}

/* The size of the head that starts like this; 0 where it is no table of a version that this player knows. */
static inline uint16_t phw_head_size(const phw_player *player, const uint8_t *from) {
    uint16_t size = phw_u16(player, from, 8);
    /* "PHWT", version 1. */
    return phw_u32(player, from, 0) == 0x54574850u && phw_at(player, from, 4) == 1u && size >= PHW_LEAST_HEAD ? size : 0u;
}

/* Goes to the first tick. */
static inline bool phw_start(phw_player *player) {
    if (!phw_enter(player) || !phw_block_state(player)) {
        return false;
    }
    if (player->read != NULL) {
        phw_look_ahead(player);
    }
    player->state = PHW_RUNNING;
    player->moving = true;
    return true;
}

/* A table in memory: goes to the next block and tests its checksum. */
PHW_APART bool phw_find(phw_player *player, uint32_t length) {
    uint32_t offset = 0;
    uint16_t size = phw_next(player, &offset);
    if (size < PHW_LEAST_BLOCK || size > player->largest || size > length - offset) {
        return false;
    }
    player->offset = offset;
    player->size = size;
    player->block = player->bytes + offset;
    return phw_whole_block(player, player->block, size, 4, UINT32_MAX);
}

/* Checks all of a table in memory, and goes back to its start; false where it is not whole. */
PHW_APART bool phw_check(phw_player *player, const uint8_t *bytes, size_t length) {
    uint16_t size;
    uint16_t first;
    phw_clear(player);
    if (bytes == NULL || length < PHW_LEAST_HEAD) {
        return false;
    }
#if SIZE_MAX > UINT32_MAX
    if (length > UINT32_MAX) {
        return false;
    }
#endif
    size = phw_head_size(player, bytes);
    if (size == 0u || size > length || !phw_head(player, bytes, size)) {
        return false;
    }
    first = player->next_size;
    player->bytes = bytes;
    /* Every block, and that they follow one another from the first tick to the last. */
    while (player->next_size != 0u) {
        if (!phw_find(player, (uint32_t)length) || !phw_block_head(player)) {
            return false;
        }
        player->tick += (uint64_t)player->block_left + 1u;
    }
    if (player->offset + player->size != length || player->tick != player->total || (player->looped && player->loop_size == 0u)) {
        return false;
    }
    player->tick = 0;
    player->block = NULL;
    player->offset = 0;
    player->size = size;
    player->next_size = first;
    return true;
}

/* Opens a table in memory; all of it is checked. False, and nothing to play, where it is not whole. */
static inline bool phw_open(phw_player *player, const uint8_t *bytes, size_t length) {
    return phw_check(player, bytes, length) && phw_start(player);
}

/* Opens a table that comes in pieces: head and first block are read and checked here, each further block while the one
 * before it is played. Tables with blocks or a head larger than PHW_BLOCK are refused. */
static inline bool phw_open_reader(phw_player *player, phw_read read, void *context) {
    const uint8_t *from;
    uint16_t size;
    phw_clear(player);
    if (read == NULL) {
        return false;
    }
    player->read = read;
    player->context = context;
    from = read(context, 0, 10);
    if (from == NULL) {
        return false;
    }
    size = phw_head_size(player, from);
    if (size == 0u || size > PHW_BLOCK) {
        return false;
    }
    from = read(context, 0, size);
    return from != NULL && phw_head(player, from, size) && player->largest <= PHW_BLOCK && phw_start(player);
}

#endif /* PHW_PLAYER */
