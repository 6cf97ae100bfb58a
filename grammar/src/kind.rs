//! The kinds of tokens and nodes of the tree, with the pattern of each token.
//!
//! One list serves the lexer, the tree and the messages: a token with a fixed
//! spelling is written next to that spelling, a token with a pattern next to
//! its pattern, a node next to what it stands for.

use logos::{FilterResult, Lexer, Logos};

/// Generates the enum and the tables over it from one list.
macro_rules! kinds {
    (
        keywords { $($keyword:ident $word:tt,)* }
        punctuation { $($mark:ident $sign:tt,)* }
        tokens { $($(#[$pattern:meta])* $token:ident $noun:literal,)* }
        nodes { $($(#[$meta:meta])* $node:ident,)* }
    ) => {
        /// The kind of a token or a node.
        #[derive(Logos, Clone, Copy, Debug, PartialEq, Eq, PartialOrd, Ord, Hash)]
        #[logos(subpattern decimal = r"[0-9](_?[0-9])*")]
        #[logos(subpattern exponent = r"[eE][+-]?[0-9](_?[0-9])*")]
        #[logos(subpattern float = r"((?&decimal)(?&exponent)|\.(?&decimal)(?&exponent)?|(?&decimal)\.(?&decimal)?(?&exponent)?)")]
        #[logos(subpattern start = r"[_\p{Lu}\p{Ll}\p{Lt}\p{Lm}\p{Lo}\p{Nl}]")]
        #[logos(subpattern name = r"(?&start)((?&start)|[0-9])*")]
        #[repr(u16)]
        pub enum SyntaxKind {
            $(#[doc = concat!("The keyword `", $word, "`.")] #[token($word)] $keyword,)*
            $(#[doc = concat!("The sign `", $sign, "`.")] #[token($sign)] $mark,)*
            $(#[doc = concat!("Token: ", $noun, ".")] $(#[$pattern])* $token,)*
            $($(#[$meta])* $node,)*
        }

        impl SyntaxKind {
            /// Every kind, at the index that is its number.
            const ALL: &'static [SyntaxKind] = &[
                $(Self::$keyword,)* $(Self::$mark,)* $(Self::$token,)* $(Self::$node,)*
            ];

            /// The fixed text of a keyword or a sign.
            pub fn spelling(self) -> Option<&'static str> {
                match self {
                    $(Self::$keyword => Some($word),)*
                    $(Self::$mark => Some($sign),)*
                    _ => None,
                }
            }

            /// Whether this is a reserved word of the language.
            pub fn is_keyword(self) -> bool {
                matches!(self, $(Self::$keyword)|*)
            }

            /// Whether this is a token, as opposed to a node.
            pub fn is_token(self) -> bool {
                !matches!(self, $(Self::$node)|*)
            }

            /// What a message calls this kind of token: its spelling in back
            /// quotes, or a noun with its article.
            pub fn noun(self) -> &'static str {
                match self {
                    $(Self::$keyword => concat!("`", $word, "`"),)*
                    $(Self::$mark => concat!("`", $sign, "`"),)*
                    $(Self::$token => $noun,)*
                    $(Self::$node => stringify!($node),)*
                }
            }
        }
    };
}

kinds! {
    keywords {
        OpenqasmKw "OPENQASM",
        IncludeKw "include",
        DefcalgrammarKw "defcalgrammar",
        PragmaKw "pragma",
        HashPragmaKw "#pragma",
        DefKw "def",
        CalKw "cal",
        DefcalKw "defcal",
        GateKw "gate",
        ExternKw "extern",
        BoxKw "box",
        LetKw "let",
        BreakKw "break",
        ContinueKw "continue",
        IfKw "if",
        ElseKw "else",
        EndKw "end",
        ReturnKw "return",
        ForKw "for",
        WhileKw "while",
        InKw "in",
        SwitchKw "switch",
        CaseKw "case",
        DefaultKw "default",
        NopKw "nop",
        InputKw "input",
        OutputKw "output",
        ConstKw "const",
        ReadonlyKw "readonly",
        MutableKw "mutable",
        QregKw "qreg",
        QubitKw "qubit",
        CregKw "creg",
        BoolKw "bool",
        BitKw "bit",
        IntKw "int",
        UintKw "uint",
        FloatKw "float",
        AngleKw "angle",
        ComplexKw "complex",
        ArrayKw "array",
        VoidKw "void",
        DurationKw "duration",
        StretchKw "stretch",
        GphaseKw "gphase",
        InvKw "inv",
        PowKw "pow",
        CtrlKw "ctrl",
        NegctrlKw "negctrl",
        HashDimKw "#dim",
        DurationofKw "durationof",
        DelayKw "delay",
        ResetKw "reset",
        MeasureKw "measure",
        BarrierKw "barrier",
        TrueKw "true",
        FalseKw "false",
        ImKw "im",
    }
    punctuation {
        LeftBracket "[",
        RightBracket "]",
        LeftBrace "{",
        RightBrace "}",
        LeftParen "(",
        RightParen ")",
        Colon ":",
        Semicolon ";",
        Dot ".",
        Comma ",",
        Equals "=",
        Arrow "->",
        Plus "+",
        PlusPlus "++",
        Minus "-",
        Star "*",
        StarStar "**",
        Slash "/",
        Percent "%",
        Pipe "|",
        PipePipe "||",
        Ampersand "&",
        AmpersandAmpersand "&&",
        Caret "^",
        At "@",
        Tilde "~",
        Bang "!",
        EqualsEquals "==",
        BangEquals "!=",
        PlusEquals "+=",
        MinusEquals "-=",
        StarEquals "*=",
        SlashEquals "/=",
        AmpersandEquals "&=",
        PipeEquals "|=",
        CaretEquals "^=",
        ShiftLeftEquals "<<=",
        ShiftRightEquals ">>=",
        PercentEquals "%=",
        StarStarEquals "**=",
        Less "<",
        Greater ">",
        LessEquals "<=",
        GreaterEquals ">=",
        ShiftLeft "<<",
        ShiftRight ">>",
    }
    tokens {
        #[regex(r"[ \t\r\n]+")]
        Whitespace "white space",
        #[regex(r"//[^\r\n]*", allow_greedy = true)]
        LineComment "a line comment",
        #[token("/*", block_comment)]
        BlockComment "a block comment",
        #[regex(r"(?&name)")]
        Identifier "a name",
        #[regex(r"\$[0-9]+")]
        HardwareQubit "a hardware qubit",
        #[regex(r"(?&decimal)")]
        DecimalInteger "an integer",
        #[regex(r"0[bB][01](_?[01])*")]
        BinaryInteger "a binary integer",
        #[regex(r"0o[0-7](_?[0-7])*")]
        OctalInteger "an octal integer",
        #[regex(r"0[xX][0-9a-fA-F](_?[0-9a-fA-F])*")]
        HexInteger "a hexadecimal integer",
        #[regex(r"(?&float)")]
        Float "a number",
        #[regex(r"((?&decimal)|(?&float))[ \t]*im")]
        Imaginary "an imaginary number",
        #[regex(r"((?&decimal)|(?&float))[ \t]*(dt|ns|us|\u{b5}s|\u{3bc}s|ms|s)")]
        Timing "a duration",
        #[regex(r#""[01](_?[01])*""#, priority = 10)]
        BitString "a bit string",
        #[regex(r#""[^"\t\r\n]+""#)]
        #[regex(r"'[^'\t\r\n]+'")]
        StringLiteral "a string in quotes",
        #[regex(r"@(?&name)(\.(?&name))*")]
        AnnotationName "an annotation",
        VersionNumber "a version number",
        RestOfLine "the rest of the line",
        CalibrationBody "a calibration body",
        UnclosedComment "an unclosed comment",
        BrokenString "a broken string",
        UnknownText "text that is no part of the language",
        EndOfFile "the end of the file",
    }
    nodes {
        /// The whole file.
        Root,
        /// Tokens that fit no rule; text that is kept but not understood.
        ErrorNode,
        /// `OPENQASM 3.0;`
        VersionStatement,
        /// `include "path";`
        IncludeStatement,
        /// `defcalgrammar "name";`
        CalibrationGrammar,
        /// `pragma` and the rest of its line.
        Pragma,
        /// `@name` and the rest of its line; a child of the statement it is for.
        Annotation,
        /// `qubit q;` or `qubit[n] q;`
        QubitDeclaration,
        /// `qreg q[n];` or `creg c[n];`
        OldDeclaration,
        /// A scalar or array variable, with or without an initialiser.
        ClassicalDeclaration,
        /// `const TYPE name = value;`
        ConstDeclaration,
        /// `input TYPE name;` or `output TYPE name;`
        IoDeclaration,
        /// `let name = value;`
        AliasDeclaration,
        /// `gate name(params) operands { … }`
        GateDefinition,
        /// `opaque name(params) operands;` of a version 2 file.
        OpaqueDeclaration,
        /// `def name(arguments) -> TYPE { … }`
        SubroutineDefinition,
        /// `extern name(types) -> TYPE;`
        ExternDeclaration,
        /// `cal { … }`
        CalStatement,
        /// `defcal name(…) operands { … }`
        DefcalStatement,
        /// `name(params) operands;` with its modifiers, and the calibrated
        /// measurement `name operands -> target;`
        GateCall,
        /// `gphase(angle);` with its modifiers.
        GphaseCall,
        /// `barrier operands;`
        BarrierStatement,
        /// `reset operand;`
        ResetStatement,
        /// `measure operand;` or `measure operand -> target;`
        MeasureStatement,
        /// `delay[duration] operands;`
        DelayStatement,
        /// `nop operands;`
        NopStatement,
        /// `box { … }` or `box[duration] { … }`
        BoxStatement,
        /// `if (condition) … else …`
        IfStatement,
        /// The `else` of an `if` and what follows it.
        ElseBranch,
        /// `for TYPE name in … body`
        ForStatement,
        /// `while (condition) body`
        WhileStatement,
        /// `switch (selector) { … }`
        SwitchStatement,
        /// `case values { … }`
        SwitchCase,
        /// `default { … }`
        SwitchDefault,
        /// `target = value;` and the compound assignments.
        AssignmentStatement,
        /// An expression as a statement.
        ExpressionStatement,
        /// `return;` or `return value;`
        ReturnStatement,
        /// `break;`
        BreakStatement,
        /// `continue;`
        ContinueStatement,
        /// `end;`
        EndStatement,
        /// `{ … }` holding statements.
        Block,
        /// A name where it is declared.
        Name,
        /// A name where it is used; also an expression.
        NameRef,
        /// The names between the parentheses of a gate definition.
        ParameterList,
        /// The operand names of a gate definition.
        OperandNames,
        /// The parameters of a subroutine, an extern or a `defcal`.
        SignatureList,
        /// One parameter of a subroutine, an extern or a `defcal`.
        SignatureParameter,
        /// `-> TYPE`
        ReturnSignature,
        /// The operands of a `defcal`.
        DefcalOperands,
        /// The values between the parentheses of a call.
        ArgumentList,
        /// The operands of a gate call or another quantum statement.
        OperandList,
        /// One operand: a hardware qubit, or a name with its indices.
        Operand,
        /// `inv @`, `pow(k) @`, `ctrl(n) @` or `negctrl(n) @`
        Modifier,
        /// `[size]` of a type or `[duration]` of a quantum statement.
        Designator,
        /// `[…]` after what is indexed.
        IndexOperator,
        /// `start:step:stop`, each optional.
        RangeExpression,
        /// `{a, b, c}` as a set of values.
        SetExpression,
        /// `{…}` as the value of an array.
        ArrayLiteral,
        /// A scalar type with its width.
        ScalarType,
        /// `array[TYPE, sizes]`
        ArrayType,
        /// `readonly array[TYPE, …]` or `mutable array[TYPE, …]`
        ArrayReferenceType,
        /// `qubit` or `qubit[n]`
        QubitType,
        /// `qreg` or `creg` as the type of a parameter.
        OldType,
        /// A literal value, or a hardware qubit used as a value.
        Literal,
        /// `(value)`
        ParenExpression,
        /// `-a`, `!a` or `~a`
        UnaryExpression,
        /// Two values and the operator between them.
        BinaryExpression,
        /// A value and one index operator.
        IndexExpression,
        /// `name(arguments)`
        CallExpression,
        /// `TYPE(value)`
        CastExpression,
        /// `durationof({ … })`
        DurationofExpression,
        /// `measure operand`, the right side of an assignment.
        MeasureExpression,
        /// `name(…) operands` as a value: a calibrated measurement.
        MeasureCall,
        /// `a ++ b ++ c`
        ConcatExpression,
    }
}

impl SyntaxKind {
    /// Whether this token may stand anywhere and means nothing.
    pub fn is_trivia(self) -> bool {
        matches!(self, Self::Whitespace | Self::LineComment | Self::BlockComment)
    }

    /// Whether the rules do not see this token: trivia, and what the lexer has
    /// reported already.
    pub(crate) fn is_skipped(self) -> bool {
        self.is_trivia() || matches!(self, Self::UnclosedComment | Self::UnknownText)
    }
}

/// The rest of a block comment whose `/*` has been read. Comments do not nest;
/// one that is never closed reaches to the end of the file.
fn block_comment(lexer: &mut Lexer<'_, SyntaxKind>) -> FilterResult<(), ()> {
    match lexer.remainder().find("*/") {
        Some(end) => {
            lexer.bump(end + 2);
            FilterResult::Emit(())
        }
        None => {
            lexer.bump(lexer.remainder().len());
            FilterResult::Error(())
        }
    }
}

/// The language as the tree library sees it.
#[derive(Clone, Copy, Debug, PartialEq, Eq, PartialOrd, Ord, Hash)]
pub enum OpenQasm {}

impl rowan::Language for OpenQasm {
    type Kind = SyntaxKind;

    fn kind_from_raw(raw: rowan::SyntaxKind) -> SyntaxKind {
        SyntaxKind::ALL.get(usize::from(raw.0)).copied().unwrap_or(SyntaxKind::ErrorNode)
    }

    fn kind_to_raw(kind: SyntaxKind) -> rowan::SyntaxKind {
        kind.into()
    }
}

/// A node of the tree.
pub type SyntaxNode = rowan::SyntaxNode<OpenQasm>;
/// A token of the tree.
pub type SyntaxToken = rowan::SyntaxToken<OpenQasm>;
/// A node or a token of the tree.
pub type SyntaxElement = rowan::SyntaxElement<OpenQasm>;

impl From<SyntaxKind> for rowan::SyntaxKind {
    fn from(kind: SyntaxKind) -> Self {
        Self(kind as u16)
    }
}
