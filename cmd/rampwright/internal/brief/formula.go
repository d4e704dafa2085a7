package brief

import (
	"errors"
	"math"
	"strings"
	"unicode/utf8"

	"github.com/expr-lang/expr/ast"
	"github.com/expr-lang/expr/conf"
	"github.com/expr-lang/expr/file"
	"github.com/expr-lang/expr/parser"
)

// Caps of a formula. Evaluation costs one step a node, so they bound the time
// of every evaluation.
const (
	longestFormula = 1000 // characters
	mostOperations = 200  // nodes of the syntax tree
	longestInteger = 18   // digits; the library reads them into 64 bits
)

// reference is a quantity as a formula names it; point is "" when it takes the
// point of the aim.
type reference struct {
	quantity, point string
	geometry        bool // the quantity belongs to the geometry
}

// formula is a compiled formula over the values of its references.
type formula struct {
	references []reference
	offsets    []int // where each reference first stands, in characters
	evaluate   term
	bare       bool // a quantity alone
}

// term is one node of a compiled formula: pure and safe for concurrent use.
type term func(values []float64) float64

// formulaError is what is wrong with a formula, at a character counted from 0.
type formulaError struct {
	offset  int
	message string
	value   string
	hint    string
}

func (e *formulaError) Error() string { return e.message }

// compileFormula reads a formula of the quantities of a vocabulary: numbers, + - * / ^,
// parentheses, the functions of the table below, names and name@point.
//
// The expression library parses it; every construct of that library which is
// not one of these is refused before or after, and nothing of its evaluation
// is used.
func compileFormula(text string, words vocabulary) (*formula, error) {
	if err := screen(text); err != nil {
		return nil, err
	}
	// name@point has no spelling in the library; $ is a letter there, and
	// screened out of what a user writes.
	config := conf.CreateNew()
	config.MaxNodes = mostOperations
	for name := range config.Builtins {
		config.Disabled[name] = true
	}
	tree, err := parser.ParseWithConfig(strings.ReplaceAll(text, "@", "$"), config)
	if err != nil {
		return nil, syntaxOf(err)
	}
	c := &compiler{formula: &formula{}, words: words}
	c.formula.evaluate = c.compile(tree.Node)
	_, c.formula.bare = tree.Node.(*ast.IdentifierNode)
	if c.err != nil {
		return nil, c.err
	}
	return c.formula, nil
}

// syntaxOf turns an error of the expression library into ours.
func syntaxOf(err error) error {
	var e *file.Error
	if !errors.As(err, &e) {
		return &formulaError{message: "not a formula: " + err.Error()}
	}
	message := strings.ReplaceAll(e.Message, "$", "@")
	token, unexpected := strings.CutPrefix(message, "unexpected token ")
	switch {
	case strings.Contains(message, "maximum allowed nodes"):
		return &formulaError{offset: e.From, message: "the formula is too long"}
	case token == "EOF":
		return &formulaError{offset: e.From, message: "not a formula: it ends too early"}
	case unexpected: // Operator("*"), Identifier("length_m")
		_, token, _ = strings.Cut(token, `("`)
		token = strings.TrimSuffix(token, `")`)
		return &formulaError{offset: e.From, message: "not a formula: " + shorten(token, 60) + " does not belong here", value: token}
	}
	return &formulaError{offset: e.From, message: "not a formula: " + message}
}

// screen refuses characters and spellings a formula has no use for.
func screen(text string) error {
	if n := utf8.RuneCountInString(text); n > longestFormula {
		return &formulaError{message: "the formula is too long", value: shorten(text, 60)}
	}
	runes := []rune(text)
	for i := 0; i < len(runes); i++ {
		c := runes[i]
		next := rune(0)
		if i+1 < len(runes) {
			next = runes[i+1]
		}
		switch {
		case c == '*' && next == '*':
			return &formulaError{i, "** is not an operator here", "**", "write ^ for a power"}
		case c == '/' && (next == '/' || next == '*'):
			return &formulaError{i, "a formula holds no comments", string([]rune{c, next}), ""}
		case c == '@' && (i == 0 || !isWord(runes[i-1]) || !isWord(next)):
			return &formulaError{i, "@ stands between a quantity and a point", "@", "such as recovery@cruise"}
		case c == '.' && i > 0 && isWord(runes[i-1]):
			return &formulaError{i, "not a formula: a point between names", ".", "a quantity at a point is written recovery@cruise"}
		case isDigit(c) || c == '.':
			end := numberEnd(runes, i)
			number := string(runes[i:end])
			if _, hint, ok := decimal(number); !ok {
				return &formulaError{i, "not a plain decimal number", number, hint}
			}
			if len(number) > longestInteger && digits(number) == len(number) {
				return &formulaError{i, "too many digits", number, "write a large number with an exponent, such as 1e20"}
			}
			i = end - 1
		case isWord(c):
			for i+1 < len(runes) && (isWord(runes[i+1]) || isDigit(runes[i+1])) {
				i++
			}
		case !strings.ContainsRune(" +-*/^(),@", c):
			return &formulaError{i, "this character is not allowed in a formula", string(c), "+ - * / ^ ( ) , and the functions " + functionNames}
		}
	}
	return nil
}

func isDigit(c rune) bool { return c >= '0' && c <= '9' }

func isWord(c rune) bool { return c >= 'a' && c <= 'z' || c >= 'A' && c <= 'Z' || c == '_' }

// numberEnd returns the end of the number, right or wrong, that begins at i.
func numberEnd(runes []rune, i int) int {
	for i < len(runes) {
		c := runes[i]
		signed := (c == '+' || c == '-') && (runes[i-1] == 'e' || runes[i-1] == 'E')
		if !(isDigit(c) || isWord(c) || c == '.' || signed) {
			break
		}
		i++
	}
	return i
}

const functionNames = "min, max, abs, sqrt, log, exp"

// unary are the functions of one argument. log is natural.
var unary = map[string]func(float64) float64{
	"abs": math.Abs, "sqrt": math.Sqrt, "log": math.Log, "exp": math.Exp,
}

// many are the functions of two arguments or more.
var many = map[string]func(a, b float64) float64{"min": math.Min, "max": math.Max}

// operators are those of two operands.
var operators = map[string]func(a, b float64) float64{
	"+": func(a, b float64) float64 { return a + b },
	"-": func(a, b float64) float64 { return a - b },
	"*": func(a, b float64) float64 { return a * b },
	"/": func(a, b float64) float64 { return a / b },
	"^": math.Pow,
}

// compiler turns a syntax tree into terms and keeps the first error.
type compiler struct {
	formula *formula
	words   vocabulary
	err     error
}

func (c *compiler) fail(n ast.Node, message, value, hint string) term {
	if c.err == nil {
		c.err = &formulaError{n.Location().From, message, value, hint}
	}
	return nil
}

// compile returns the term of a node; only numbers, names, the operators and
// the functions of the tables pass.
func (c *compiler) compile(n ast.Node) term {
	switch n := n.(type) {
	case *ast.IntegerNode:
		return constant(float64(n.Value))
	case *ast.FloatNode:
		return constant(n.Value)
	case *ast.IdentifierNode:
		return c.name(n)
	case *ast.UnaryNode:
		return c.sign(n)
	case *ast.BinaryNode:
		operator, ok := operators[n.Operator]
		if !ok {
			return c.fail(n, n.Operator+" is not an operator here", n.Operator, "operators are + - * / ^")
		}
		return pairwise(operator, c.compile(n.Left), c.compile(n.Right))
	case *ast.CallNode:
		return c.call(n)
	case *ast.BuiltinNode:
		return c.fail(n, n.Name+" is not a function here", n.Name, "functions are "+functionNames)
	default:
		return c.fail(n, "not a formula of quantities", "", "operators are + - * / ^, functions "+functionNames)
	}
}

func constant(v float64) term { return func([]float64) float64 { return v } }

func pairwise(f func(a, b float64) float64, left, right term) term {
	return func(values []float64) float64 { return f(left(values), right(values)) }
}

func (c *compiler) sign(n *ast.UnaryNode) term {
	operand := c.compile(n.Node)
	switch n.Operator {
	case "-":
		return func(values []float64) float64 { return -operand(values) }
	case "+":
		return operand
	default:
		return c.fail(n, n.Operator+" is not an operator here", n.Operator, "operators are + - * / ^")
	}
}

// name compiles a reference to a quantity; equal references share a slot.
func (c *compiler) name(n *ast.IdentifierNode) term {
	quantity, point, _ := strings.Cut(n.Value, "$")
	if strings.Contains(point, "$") {
		return c.fail(n, "more than one @ after a quantity", strings.ReplaceAll(n.Value, "$", "@"), "")
	}
	if unary[n.Value] != nil || many[n.Value] != nil {
		return c.fail(n, n.Value+" is a function and needs parentheses", n.Value, "such as "+n.Value+"(..)")
	}
	if problem := c.words.check(quantity, point); problem != nil {
		problem.offset = n.Location().From
		if c.err == nil {
			c.err = problem
		}
		return nil
	}
	found, _ := c.words.find(quantity)
	ref := reference{quantity, point, found.geometry}
	for i, have := range c.formula.references {
		if have == ref {
			return slot(i)
		}
	}
	c.formula.references = append(c.formula.references, ref)
	c.formula.offsets = append(c.formula.offsets, n.Location().From)
	return slot(len(c.formula.references) - 1)
}

func slot(i int) term { return func(values []float64) float64 { return values[i] } }

// call compiles a function.
func (c *compiler) call(n *ast.CallNode) term {
	callee, ok := n.Callee.(*ast.IdentifierNode)
	if !ok {
		return c.fail(n, "not a function", "", "functions are "+functionNames)
	}
	arguments := make([]term, len(n.Arguments))
	for i, argument := range n.Arguments {
		arguments[i] = c.compile(argument)
	}
	switch f, g := unary[callee.Value], many[callee.Value]; {
	case f != nil && len(arguments) == 1:
		argument := arguments[0]
		return func(values []float64) float64 { return f(argument(values)) }
	case f != nil:
		return c.fail(n, callee.Value+" takes one argument", callee.Value, "")
	case g != nil && len(arguments) >= 2:
		return fold(g, arguments)
	case g != nil:
		return c.fail(n, callee.Value+" takes two arguments or more", callee.Value, "")
	default:
		return c.fail(n, shorten(strings.ReplaceAll(callee.Value, "$", "@"), 60)+" is not a function here", callee.Value, "functions are "+functionNames)
	}
}

func fold(f func(a, b float64) float64, arguments []term) term {
	return func(values []float64) float64 {
		v := arguments[0](values)
		for _, argument := range arguments[1:] {
			v = f(v, argument(values))
		}
		return v
	}
}
