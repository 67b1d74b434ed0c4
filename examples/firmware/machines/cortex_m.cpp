// An Arm Cortex-M3 or M4F on the MPS2 boards that QEMU models: start-up, SysTick, semihosting. Addresses and bits from
// the Armv7-M Architecture Reference Manual (DDI 0403), calls from Arm's "Semihosting for AArch32 and AArch64".
#include <cstddef>
#include <cstdint>

#include "machine.hpp"

extern "C" {
extern std::uint32_t data_in_flash[], data_start[], data_end[], bss_start[], bss_end[], stack_top[];
extern void (*const constructors_start[])(), (*const constructors_end[])();
int main();
[[noreturn]] void on_reset() noexcept;
[[noreturn]] void on_fault() noexcept;

using Handler = void (*)() noexcept;
struct Vectors {
  std::uint32_t* stack;
  Handler handlers[15];
};
// No interrupt is ever taken: a pending SysTick only wakes the processor.
extern Vectors const vectors;
[[gnu::section(".vectors"), gnu::used]] Vectors const vectors{
    stack_top,
    {on_reset, on_fault, on_fault, on_fault, on_fault, on_fault, on_fault, on_fault, on_fault, on_fault, on_fault,
     on_fault, on_fault, on_fault, on_fault}};
}

namespace {

std::uint32_t volatile& at(std::uintptr_t address) noexcept {
  return *reinterpret_cast<std::uint32_t volatile*>(address);
}
constexpr std::uintptr_t systick_control = 0xE000E010;
constexpr std::uintptr_t systick_reload = 0xE000E014;
constexpr std::uintptr_t systick_value = 0xE000E018;
constexpr std::uintptr_t interrupt_state = 0xE000ED04;
constexpr std::uint32_t enabled = 1U;
constexpr std::uint32_t interrupting = 1U << 1U;
constexpr std::uint32_t by_processor_clock = 1U << 2U;
constexpr std::uint32_t tick_pending = 1U << 26U;
constexpr std::uint32_t clear_tick = 1U << 25U;
constexpr std::uint32_t clock = 25'000'000;         // hertz, of these boards
constexpr std::uint32_t count_mask = 0x00FF'FFFFU;  // SysTick has 24 bits

std::uint32_t host(std::uint32_t call, void const* argument) noexcept {
  register std::uint32_t r0 asm("r0") = call;
  register void const* r1 asm("r1") = argument;
  asm volatile("bkpt 0xab" : "+r"(r0) : "r"(r1) : "memory");
  return r0;
}

void run_systick(std::uint32_t reload, std::uint32_t extra) noexcept {
  at(systick_control) = 0;
  at(systick_reload) = reload;
  at(systick_value) = 0;
  at(interrupt_state) = clear_tick;
  at(systick_control) = enabled | by_processor_clock | extra;
}

}  // namespace

extern "C" void on_reset() noexcept {
  asm volatile("cpsid i");
#ifdef __ARM_FP
  at(0xE000ED88) |= 0xFU << 20U;  // CPACR: the floating-point unit is off after reset
  asm volatile("dsb\n isb");
#endif
  std::uint32_t const* from = data_in_flash;
  for (std::uint32_t* to = data_start; to != data_end;) {
    *to++ = *from++;
  }
  for (std::uint32_t* to = bss_start; to != bss_end;) {
    *to++ = 0;
  }
  for (auto const* constructor = constructors_start; constructor != constructors_end; ++constructor) {
    (*constructor)();
  }
  machine::stop(main());
}

extern "C" void on_fault() noexcept {
  machine::put("fault\n");
  machine::stop(3);
}

namespace machine {

bool const counts = true;

// Under -icount shift=0 an instruction takes a nanosecond of the machine's time.
std::uint32_t const grain = 1'000'000'000U / clock;

void start_ticks(std::uint32_t milliseconds) noexcept { run_systick(clock / 1000U * milliseconds - 1U, interrupting); }
void stop_ticks() noexcept { run_systick(count_mask, 0); }

bool wait_for_tick() noexcept {
  bool const in_time = (at(interrupt_state) & tick_pending) == 0;
  while ((at(interrupt_state) & tick_pending) == 0) {
    asm volatile("wfi");
  }
  at(interrupt_state) = clear_tick;
  return in_time;
}

std::uint32_t reading() noexcept { return at(systick_value); }
std::uint32_t instructions(std::uint32_t from, std::uint32_t to) noexcept {
  return ((from - to) & count_mask) * grain;  // it counts down
}

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
  asm volatile("mov %0, sp" : "=r"(here));
  return here;
}

}  // namespace machine
