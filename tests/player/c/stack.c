/* Every function of the player, called from one of its own each, for measuring stack and size. */
#include "phw_player.h"

bool open_memory(phw_player *player, const uint8_t *bytes, size_t length);
bool open_stream(phw_player *player, phw_read read, void *context);
bool tick(phw_player *player, phw_setpoint *point);
void stop(phw_player *player);

bool open_memory(phw_player *player, const uint8_t *bytes, size_t length) {
    return phw_open(player, bytes, length);
}
bool open_stream(phw_player *player, phw_read read, void *context) {
    return phw_open_reader(player, read, context);
}
bool tick(phw_player *player, phw_setpoint *point) {
    return phw_tick(player, point);
}
void stop(phw_player *player) {
    phw_stop(player);
}
phw_player the_player;
