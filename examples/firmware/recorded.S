/* The recorded run as bytes. RECORDED names the file. */
  .section .rodata
  .globl recorded_run
  .balign 4
recorded_run:
  .incbin RECORDED
#if defined __linux__ && defined __ELF__
  .section .note.GNU-stack, "", %progbits
#endif
