// What the program asks of a machine. Each file beside this one answers for one of them.
#pragma once

#include <cstdint>

namespace machine {

/// Whether instructions are counted here, and a stack may be painted: on the microcontrollers under QEMU.
extern bool const counts;

/// From now on a tick every so many milliseconds, at most 500.
void start_ticks(std::uint32_t milliseconds) noexcept;

/// Sleeps until the next tick. False when it had come before this was called: the work took too long.
bool wait_for_tick() noexcept;

/// No more ticks: the counter below then runs for a good half second before it starts again.
void stop_ticks() noexcept;

/// A reading of the counter of instructions, and how many were executed from one reading to a later one. Exact to
/// `grain` instructions.
std::uint32_t reading() noexcept;
std::uint32_t instructions(std::uint32_t from, std::uint32_t to) noexcept;
extern std::uint32_t const grain;

/// Text to whoever listens: a host by semihosting, or standard output.
void put(char const* text) noexcept;

/// The end: 0 when all is well.
[[noreturn]] void stop(int code) noexcept;

/// Where the caller's stack ends just now, and nullptr where it is not ours to paint.
std::uint32_t* stack_pointer() noexcept;

}  // namespace machine
