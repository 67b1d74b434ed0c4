// QEMU's 32-bit RISC-V board "virt": its timer (a CLINT, mtime at 10 MHz), the counter mcycle, semihosting. Start-up is
// in riscv_virt.S. Names and bits from the RISC-V privileged specification and "RISC-V Semihosting".
#include <cstddef>
#include <cstdint>

#include "machine.hpp"

extern "C" {
std::uint32_t host(std::uint32_t call, void const* argument) noexcept;
[[noreturn]] void stop_machine(int code) noexcept;
[[noreturn]] void on_fault() noexcept;
}

namespace {

std::uint32_t volatile& at(std::uintptr_t address) noexcept {
  return *reinterpret_cast<std::uint32_t volatile*>(address);
}
constexpr std::uintptr_t mtime = 0x0200'BFF8;
constexpr std::uintptr_t mtimecmp = 0x0200'4000;
constexpr std::uint32_t timer_hertz = 10'000'000;
constexpr std::uint32_t timer_interrupt = 1U << 7U;  // mie.MTIE and mip.MTIP

std::uint32_t period = 0;
std::uint64_t next_tick = 0;

std::uint64_t time_now() noexcept {
  for (;;) {
    std::uint32_t const high = at(mtime + 4);
    std::uint32_t const low = at(mtime);
    if (high == at(mtime + 4)) {
      return (static_cast<std::uint64_t>(high) << 32U) | low;
    }
  }
}

void wake_at(std::uint64_t when) noexcept {
  at(mtimecmp + 4) = 0xFFFF'FFFFU;  // so that no time in between is in the past
  at(mtimecmp) = static_cast<std::uint32_t>(when);
  at(mtimecmp + 4) = static_cast<std::uint32_t>(when >> 32U);
}

}  // namespace

extern "C" void stop_machine(int code) noexcept { machine::stop(code); }
extern "C" void on_fault() noexcept {
  machine::put("fault\n");
  machine::stop(3);
}

namespace machine {

bool const counts = true;
std::uint32_t const grain = 1;

void start_ticks(std::uint32_t milliseconds) noexcept {
  period = timer_hertz / 1000U * milliseconds;
  next_tick = time_now() + period;
  wake_at(next_tick);
  asm volatile("csrs mie, %0" : : "r"(timer_interrupt));  // mstatus.MIE stays off: it wakes, and calls no handler
}
void stop_ticks() noexcept { asm volatile("csrc mie, %0" : : "r"(timer_interrupt)); }

bool wait_for_tick() noexcept {
  bool const in_time = time_now() < next_tick;
  while (time_now() < next_tick) {
    asm volatile("wfi");
  }
  next_tick += period;
  wake_at(next_tick);
  return in_time;
}

std::uint32_t reading() noexcept {
  std::uint32_t count = 0;
  asm volatile("csrr %0, mcycle" : "=r"(count));
  return count;
}
std::uint32_t instructions(std::uint32_t from, std::uint32_t to) noexcept { return to - from; }

void put(char const* text) noexcept { host(0x04, text); }  // SYS_WRITE0

void stop(int code) noexcept {
  std::uint32_t const block[2] = {0x20026U, static_cast<std::uint32_t>(code)};  // ADP_Stopped_ApplicationExit
  for (;;) {
    host(0x20, block);  // SYS_EXIT_EXTENDED
  }
}

// A leaf that needs no frame, so its stack pointer is the caller's.
[[gnu::noinline]] std::uint32_t* stack_pointer() noexcept {
  std::uint32_t* here = nullptr;
  asm volatile("mv %0, sp" : "=r"(here));
  return here;
}

}  // namespace machine
