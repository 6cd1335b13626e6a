/* libFuzzer target: any bytes, with checksums made right or not, in memory and streamed, played for a while and stopped. */
#include "phw_player.h"

#include <stdlib.h>
#include <string.h>

typedef struct {
    const uint8_t *bytes;
    size_t length;
    uint8_t *given[2];
    unsigned turn;
} source;

/* Each block in memory of its own, of exactly its size, given back when it is no longer the player's. */
static const uint8_t *give(void *context, uint32_t offset, uint16_t size) {
    source *from = (source *)context;
    uint8_t *to;
    if (offset > from->length || size > from->length - offset) {
        return NULL;
    }
    free(from->given[from->turn]);
    to = (uint8_t *)malloc(size > 0 ? size : 1u);
    from->given[from->turn] = to;
    from->turn ^= 1u;
    if (to != NULL) {
        memcpy(to, from->bytes + offset, size);
    }
    return to;
}

static void put32(uint8_t *to, uint32_t value) {
    unsigned index;
    for (index = 0; index < 4; index++) {
        to[index] = (uint8_t)(value >> (8 * index));
    }
}

static uint32_t crc(const uint8_t *bytes, size_t length) {
    uint32_t state = UINT32_MAX;
    size_t at;
    for (at = 0; at < length; at++) {
        state = phw_crc(state, bytes[at]);
    }
    return state ^ UINT32_MAX;
}

/* Makes the checksums of head and blocks right, so that what stands in them is reached. */
static void repair(uint8_t *bytes, size_t length) {
    size_t size, at;
    if (length < 106) {
        return;
    }
    size = (size_t)bytes[8] | (size_t)bytes[9] << 8;
    if (size < 106 || size > length) {
        return;
    }
    put32(bytes + size - 4, crc(bytes, size - 4));
    for (at = size; at + 11 <= length; at += size) {
        size = (size_t)bytes[at + 4] | (size_t)bytes[at + 5] << 8;
        if (size < 11 || size > length - at) {
            return;
        }
        put32(bytes + at, crc(bytes + at + 4, size - 4));
    }
}

static void play(phw_player *player) {
    phw_setpoint point;
    unsigned tick;
    for (tick = 0; tick < 3000; tick++) {
        bool dark = phw_state(player) != PHW_RUNNING;
        bool more = phw_tick(player, &point);
        /* Once it no longer runs, and where it says that all is over, there is no light. */
        if ((dark || !more) && point.beam != 0) {
            abort();
        }
        if (!more) {
            break;
        }
        if (point.a_counts >= player->rotor[0].counts || point.b_counts >= player->rotor[1].counts) {
            abort();
        }
    }
    phw_stop(player);
    for (tick = 0; tick < 3000 && phw_tick(player, &point); tick++) {
        if (point.beam != 0) {
            abort();
        }
    }
}

int LLVMFuzzerTestOneInput(const uint8_t *data, size_t length);

int LLVMFuzzerTestOneInput(const uint8_t *data, size_t length) {
    static source from;
    phw_player player;
    uint8_t *bytes = (uint8_t *)malloc(length > 0 ? length : 1u);
    if (bytes == NULL) {
        return 0;
    }
    if (length > 0) {
        memcpy(bytes, data, length);
    }
    if (length > 0 && (data[length - 1] & 7u) != 0) {
        repair(bytes, length);
    }
    if (phw_open(&player, bytes, length)) {
        play(&player);
    }
    memset(&from, 0, sizeof from);
    from.bytes = bytes;
    from.length = length;
    if (phw_open_reader(&player, give, &from)) {
        play(&player);
    }
    free(from.given[0]);
    free(from.given[1]);
    free(bytes);
    return 0;
}
