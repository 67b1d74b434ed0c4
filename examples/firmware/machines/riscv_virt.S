# Where a 32-bit RISC-V starts on QEMU's "virt" board: one hart, machine mode, no monitor before it.
  .section .start, "ax"
  .globl on_reset
on_reset:
  .option push
  .option norelax
  la gp, __global_pointer$
  .option pop
  la sp, stack_top
  la t0, on_trap
  csrw mtvec, t0
  li t0, 1 << 13          # mstatus.FS: the floating-point unit is off after reset
  csrs mstatus, t0
  csrw fcsr, zero
  la t0, bss_start
  la t1, bss_end
1:
  bgeu t0, t1, 2f
  sw zero, (t0)
  addi t0, t0, 4
  j 1b
2:
  la s0, constructors_start
  la s1, constructors_end
3:
  bgeu s0, s1, 4f
  lw t0, (s0)
  jalr t0
  addi s0, s0, 4
  j 3b
4:
  call main
  call stop_machine

  .balign 4
on_trap:
  j on_fault

# host(call, argument): the three instructions by which a debugger knows a semihosting call from a breakpoint. They
# must not be compressed, nor lie across two pages.
  .text
  .globl host
  .balign 16
host:
  .option push
  .option norvc
  slli x0, x0, 0x1f
  ebreak
  srai x0, x0, 7
  .option pop
  ret
