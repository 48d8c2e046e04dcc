/**
 * OpenQASM 3.0 without calibration blocks and pragmas, as ordered choices: the grammar that the language's
 * specification publishes, written out by us (openqasm.com; A. Cross et al., ACM Trans. Quantum Comput. 3, 12 (2022)).
 * Words in quotes are tokens, words in capitals kinds of tokens; `?`, `*`, `+` as usual; a name is a rule.
 * Precedence of operators: ** over unary over * / % over + − over shifts over comparisons over & ^ | && ||.
 */
export const OPENQASM = `
program = version? item*
version = 'OPENQASM' NUMBER ';'
item = scope / statement
scope = '{' item* '}'
statement = include / qubits / creg / io / const / classical / alias / gate_definition / subroutine / extern
  / if / for / while / switch / break / continue / end / return / box / barrier / delay / nop / reset
  / measure_arrow / assignment / gate_call / expression_statement

include = 'include' STRING ';'
qubits = 'qubit' designator? NAME ';'
creg = ('creg' / 'qreg') NAME designator? ';'
io = ('input' / 'output') type NAME ';'
const = 'const' scalar NAME '=' initial ';'
classical = type NAME ('=' initial)? ';'
alias = 'let' NAME '=' expression ('++' expression)* ';'
initial = list / measurement / expression
list = '{' (item_of_list (',' item_of_list)* ','?)? '}'
item_of_list = list / expression

type = array / scalar
scalar = ('bit' / 'int' / 'uint' / 'float' / 'angle') designator? / 'bool' / 'duration' / 'stretch'
  / 'complex' ('[' scalar ']')?
array = 'array' '[' scalar ',' expressions ']'
designator = '[' expression ']'

gate_definition = 'gate' NAME ('(' names? ')')? names scope
subroutine = 'def' NAME '(' arguments? ')' ('->' scalar)? scope
extern = 'extern' NAME '(' (type (',' type)* ','?)? ')' ('->' scalar)? ';'
arguments = argument (',' argument)* ','?
argument = ('qubit' designator? / ('readonly' / 'mutable') array / type) NAME
names = NAME (',' NAME)* ','?

if = 'if' '(' expression ')' item ('else' item)?
for = 'for' scalar NAME 'in' ('[' range ']' / set / expression) item
while = 'while' '(' expression ')' item
switch = 'switch' '(' expression ')' '{' (('case' expressions / 'default') scope)* '}'
break = 'break' ';'
continue = 'continue' ';'
end = 'end' ';'
return = 'return' (measurement / expression)? ';'
box = 'box' designator? scope
barrier = 'barrier' operands? ';'
delay = 'delay' designator operands? ';'
nop = 'nop' operands? ';'
reset = 'reset' operand ';'
measure_arrow = measurement ('->' operand)? ';'
measurement = 'measure' operand
assignment = operand ASSIGN (measurement / expression) ';' / operand '=' (measurement / expression) ';'
gate_call = modifier* NAME parameters? designator? operands ';' / modifier* 'gphase' parameters? operands? ';'
modifier = ('inv' / 'pow' '(' expression ')' / ('ctrl' / 'negctrl') ('(' expression ')')?) '@'
parameters = '(' expressions? ')'
operands = operand (',' operand)* ','?
operand = HARDWARE / NAME index*
expression_statement = expression ';'

expressions = expression (',' expression)* ','?
expression = conjunction ('||' conjunction)*
conjunction = bit_or ('&&' bit_or)*
bit_or = bit_xor ('|' bit_xor)*
bit_xor = bit_and ('^' bit_and)*
bit_and = equality ('&' equality)*
equality = comparison (('==' / '!=') comparison)*
comparison = shift (('>=' / '<=' / '>' / '<') shift)*
shift = sum (('>>' / '<<') sum)*
sum = product (('+' / '-') product)*
product = unary (('*' / '/' / '%') unary)*
unary = ('~' / '!' / '-') unary / power
power = indexed ('**' unary)?
indexed = primary index*
index = '[' (set / entry (',' entry)* ','?) ']'
entry = range / expression
range = expression? ':' expression? (':' expression)?
set = '{' expressions '}'
primary = '(' expression ')' / cast / call / TIMING / NUMBER / BITS / 'true' / 'false' / HARDWARE / NAME
cast = type '(' expression ')'
call = NAME '(' expressions? ')'
`;

export const KEYWORDS = new Set(
  (
    'OPENQASM include gate extern box let break continue if else end return for while in switch case default nop input ' +
    'output const readonly mutable qreg qubit creg bool bit int uint float angle complex array void duration stretch ' +
    'gphase inv pow ctrl negctrl durationof delay reset measure barrier true false def'
  ).split(' '),
);
