# Makes a header what Doxygen understands; every line keeps its number. For sed -E.

# It does not know `namespace wend::inline v0`, and takes `signals:` for a word of its own.
s/namespace wend::inline v0/namespace wend/
s/constexpr signals::/constexpr wend::signals::/

# The plain comment at the top of a header, of which the first line names the file, tells what the file is for.
1,/^#pragma once/{
  s|^// wend/[^ ]* - |/// |
  s|^//( .*)?$|///\1|
  s|^#pragma once|/// @file|
}

# A macro that its header undefines again is nobody's business.
/^#define WEND_ASSERT/!s/^#define /#pragma /

# The dot of an abbreviation does not end the sentence that stands for the whole.
/\/\/\//{
  :again
  s/(^|[ (])(AS|Appl|Autom|Camb|Eng|Exp|Instrum|Int|J|Math|Meas|Phys|Proc|Syst|Tech|Trans|eq|sec)\.( |$)/\1\2.\\ /
  t again
}
