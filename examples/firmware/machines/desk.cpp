// A laptop: the same program as fast as it goes, with nothing counted.
#include <cstdint>
#include <cstdio>
#include <cstdlib>

#include "machine.hpp"

namespace machine {

bool const counts = false;
std::uint32_t const grain = 1;
void start_ticks(std::uint32_t) noexcept {}
void stop_ticks() noexcept {}
bool wait_for_tick() noexcept { return true; }
std::uint32_t reading() noexcept { return 0; }
std::uint32_t instructions(std::uint32_t, std::uint32_t) noexcept { return 0; }
void put(char const* text) noexcept { std::fputs(text, stdout); }
void stop(int code) noexcept { std::exit(code); }
std::uint32_t* stack_pointer() noexcept { return nullptr; }

}  // namespace machine
