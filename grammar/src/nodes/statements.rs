//! Views of what a program does: gate calls and other quantum statements,
//! control flow, assignments.

use super::*;
use SyntaxKind as K;

nodes! {
    /// `name(params) operands;` with its modifiers, and the calibrated
    /// measurement `name operands -> target;`
    GateCall;
    /// `gphase(angle);` with its modifiers.
    GphaseCall;
    /// `barrier operands;`
    BarrierStatement;
    /// `reset operand;`
    ResetStatement;
    /// `measure operand;` or `measure operand -> target;`
    MeasureStatement;
    /// `delay[duration] operands;`
    DelayStatement;
    /// `nop operands;`
    NopStatement;
    /// `box { … }` or `box[duration] { … }`
    BoxStatement;
    /// `if (condition) … else …`
    IfStatement;
    /// The `else` of an `if` and what follows it.
    ElseBranch;
    /// `for TYPE name in … body`
    ForStatement;
    /// `while (condition) body`
    WhileStatement;
    /// `switch (selector) { … }`
    SwitchStatement;
    /// `case values { … }`
    SwitchCase;
    /// `default { … }`
    SwitchDefault;
    /// `target = value;` and the compound assignments.
    AssignmentStatement;
    /// An expression as a statement.
    ExpressionStatement;
    /// `return;` or `return value;`
    ReturnStatement;
    /// `break;`
    BreakStatement;
    /// `continue;`
    ContinueStatement;
    /// `end;`
    EndStatement;
    /// `{ … }` holding statements.
    Block;
    /// The values between the parentheses of a call.
    ArgumentList;
    /// The operands of a gate call or another quantum statement.
    OperandList;
    /// One operand: a hardware qubit, or a name with its indices.
    Operand;
    /// `inv @`, `pow(k) @`, `ctrl(n) @` or `negctrl(n) @`
    Modifier;
}

choice! {
    /// Any statement but the version line, pragmas included.
    Statement {
        /// See [`IncludeStatement`].
        Include(IncludeStatement),
        /// See [`CalibrationGrammar`].
        CalibrationGrammar(CalibrationGrammar),
        /// See [`Pragma`].
        Pragma(Pragma),
        /// See [`QubitDeclaration`].
        Qubit(QubitDeclaration),
        /// See [`OldDeclaration`].
        Old(OldDeclaration),
        /// See [`ClassicalDeclaration`].
        Classical(ClassicalDeclaration),
        /// See [`ConstDeclaration`].
        Const(ConstDeclaration),
        /// See [`IoDeclaration`].
        Io(IoDeclaration),
        /// See [`AliasDeclaration`].
        Alias(AliasDeclaration),
        /// See [`GateDefinition`].
        Gate(GateDefinition),
        /// See [`OpaqueDeclaration`].
        Opaque(OpaqueDeclaration),
        /// See [`SubroutineDefinition`].
        Subroutine(SubroutineDefinition),
        /// See [`ExternDeclaration`].
        Extern(ExternDeclaration),
        /// See [`CalStatement`].
        Cal(CalStatement),
        /// See [`DefcalStatement`].
        Defcal(DefcalStatement),
        /// See [`GateCall`].
        GateCall(GateCall),
        /// See [`GphaseCall`].
        Gphase(GphaseCall),
        /// See [`BarrierStatement`].
        Barrier(BarrierStatement),
        /// See [`ResetStatement`].
        Reset(ResetStatement),
        /// See [`MeasureStatement`].
        Measure(MeasureStatement),
        /// See [`DelayStatement`].
        Delay(DelayStatement),
        /// See [`NopStatement`].
        Nop(NopStatement),
        /// See [`BoxStatement`].
        Box(BoxStatement),
        /// See [`IfStatement`].
        If(IfStatement),
        /// See [`ForStatement`].
        For(ForStatement),
        /// See [`WhileStatement`].
        While(WhileStatement),
        /// See [`SwitchStatement`].
        Switch(SwitchStatement),
        /// See [`AssignmentStatement`].
        Assignment(AssignmentStatement),
        /// See [`ExpressionStatement`].
        Expression(ExpressionStatement),
        /// See [`ReturnStatement`].
        Return(ReturnStatement),
        /// See [`BreakStatement`].
        Break(BreakStatement),
        /// See [`ContinueStatement`].
        Continue(ContinueStatement),
        /// See [`EndStatement`].
        End(EndStatement),
        /// See [`Block`].
        Block(Block),
    }
}

/// Gives the operands to views that have a list of them.
macro_rules! with_operands {
    ($($view:ident)*) => {
        $(impl $view {
            /// The list of operands.
            pub fn operand_list(&self) -> Option<OperandList> {
                self.child()
            }

            /// The operands, in order.
            pub fn operands(&self) -> Vec<Operand> {
                self.operand_list().map_or_else(Vec::new, |list| list.operands().collect())
            }
        })*
    };
}

with_operands! { GateCall GphaseCall BarrierStatement DelayStatement NopStatement }

/// Gives modifiers, arguments and the duration to the two calls.
macro_rules! calls {
    ($($view:ident)*) => {
        $(impl $view {
            /// The modifiers, as written from left to right; the last one acts
            /// on the gate first.
            pub fn modifiers(&self) -> AstChildren<Modifier> {
                self.children()
            }

            /// The list of classical arguments, if there are parentheses.
            pub fn argument_list(&self) -> Option<ArgumentList> {
                self.child()
            }

            /// The classical arguments.
            pub fn arguments(&self) -> Vec<Expression> {
                self.argument_list().map_or_else(Vec::new, |list| list.arguments().collect())
            }

            /// The duration in brackets.
            pub fn designator(&self) -> Option<Designator> {
                self.child()
            }
        })*
    };
}

calls! { GateCall GphaseCall }

impl GateCall {
    /// The name of the gate.
    pub fn name(&self) -> Option<NameRef> {
        self.child()
    }

    /// The target after `->`, which makes this a calibrated measurement.
    pub fn target(&self) -> Option<Operand> {
        self.child()
    }
}

impl ArgumentList {
    /// The values in the list.
    pub fn arguments(&self) -> AstChildren<Expression> {
        self.children()
    }
}

impl OperandList {
    /// The operands in the list.
    pub fn operands(&self) -> AstChildren<Operand> {
        self.children()
    }
}

impl Operand {
    /// The name, if this is no hardware qubit.
    pub fn name(&self) -> Option<NameRef> {
        self.child()
    }

    /// The hardware qubit such as `$0`.
    pub fn hardware_qubit(&self) -> Option<SyntaxToken> {
        self.token(K::HardwareQubit)
    }

    /// The index operators after the name.
    pub fn indices(&self) -> AstChildren<IndexOperator> {
        self.children()
    }
}

/// Which modifier this is.
#[derive(Clone, Copy, Debug, PartialEq, Eq, Hash)]
pub enum ModifierKind {
    /// `inv`
    Inv,
    /// `pow(k)`
    Pow,
    /// `ctrl` or `ctrl(n)`
    Ctrl,
    /// `negctrl` or `negctrl(n)`
    Negctrl,
}

impl Modifier {
    /// Which modifier this is.
    pub fn kind(&self) -> Option<ModifierKind> {
        let keyword = self.token_of(&[K::InvKw, K::PowKw, K::CtrlKw, K::NegctrlKw])?;
        match keyword.kind() {
            K::InvKw => Some(ModifierKind::Inv),
            K::PowKw => Some(ModifierKind::Pow),
            K::CtrlKw => Some(ModifierKind::Ctrl),
            _ => Some(ModifierKind::Negctrl),
        }
    }

    /// The exponent of `pow`, or the number of controls.
    pub fn argument(&self) -> Option<Expression> {
        self.child()
    }
}

impl ResetStatement {
    /// What is reset.
    pub fn operand(&self) -> Option<Operand> {
        self.child()
    }
}

impl MeasureStatement {
    /// The measurement before the arrow.
    pub fn measurement(&self) -> Option<MeasureExpression> {
        self.child()
    }

    /// What is measured.
    pub fn operand(&self) -> Option<Operand> {
        self.measurement()?.operand()
    }

    /// Where the result goes.
    pub fn target(&self) -> Option<Operand> {
        self.child()
    }
}

impl DelayStatement {
    /// The duration in brackets.
    pub fn designator(&self) -> Option<Designator> {
        self.child()
    }
}

impl BoxStatement {
    /// The duration in brackets.
    pub fn designator(&self) -> Option<Designator> {
        self.child()
    }

    /// The body in braces.
    pub fn body(&self) -> Option<Block> {
        self.child()
    }
}

impl IfStatement {
    /// The condition.
    pub fn condition(&self) -> Option<Expression> {
        self.child()
    }

    /// What happens if it holds: a block or a single statement.
    pub fn then_branch(&self) -> Option<Statement> {
        self.child()
    }

    /// What happens otherwise: a block or a single statement.
    pub fn else_branch(&self) -> Option<Statement> {
        self.child::<ElseBranch>()?.body()
    }
}

impl ElseBranch {
    /// The block or the single statement after `else`.
    pub fn body(&self) -> Option<Statement> {
        self.child()
    }
}

impl ForStatement {
    /// The type of the loop variable.
    pub fn ty(&self) -> Option<ScalarType> {
        self.child()
    }

    /// The loop variable.
    pub fn variable(&self) -> Option<Name> {
        self.child()
    }

    /// What the variable runs over: a range, a set or any other expression.
    pub fn iterated(&self) -> Option<Iterated> {
        self.child()
    }

    /// The block or the single statement that is repeated.
    pub fn body(&self) -> Option<Statement> {
        self.child()
    }
}

impl WhileStatement {
    /// The condition.
    pub fn condition(&self) -> Option<Expression> {
        self.child()
    }

    /// The block or the single statement that is repeated.
    pub fn body(&self) -> Option<Statement> {
        self.child()
    }
}

impl SwitchStatement {
    /// The value that is looked at.
    pub fn selector(&self) -> Option<Expression> {
        self.child()
    }

    /// The cases, in order.
    pub fn cases(&self) -> AstChildren<SwitchCase> {
        self.children()
    }

    /// The default.
    pub fn default(&self) -> Option<SwitchDefault> {
        self.child()
    }
}

impl SwitchCase {
    /// The values of this case.
    pub fn values(&self) -> AstChildren<Expression> {
        self.children()
    }

    /// The body in braces.
    pub fn body(&self) -> Option<Block> {
        self.child()
    }
}

impl SwitchDefault {
    /// The body in braces.
    pub fn body(&self) -> Option<Block> {
        self.child()
    }
}

impl AssignmentStatement {
    /// What is assigned to: a name, or a name with indices.
    pub fn target(&self) -> Option<Operand> {
        self.child()
    }

    /// The sign: `=` or a compound assignment.
    pub fn operator(&self) -> Option<SyntaxToken> {
        self.token_of(ASSIGNMENT_SIGNS)
    }

    /// The new value.
    pub fn value(&self) -> Option<Initialiser> {
        self.child()
    }
}

/// The signs that make a statement an assignment.
pub(crate) const ASSIGNMENT_SIGNS: &[SyntaxKind] = &[
    K::Equals,
    K::PlusEquals,
    K::MinusEquals,
    K::StarEquals,
    K::SlashEquals,
    K::AmpersandEquals,
    K::PipeEquals,
    K::CaretEquals,
    K::ShiftLeftEquals,
    K::ShiftRightEquals,
    K::PercentEquals,
    K::StarStarEquals,
];

impl ExpressionStatement {
    /// The expression.
    pub fn expression(&self) -> Option<Expression> {
        self.child()
    }
}

impl ReturnStatement {
    /// The returned value.
    pub fn value(&self) -> Option<Initialiser> {
        self.child()
    }
}

impl Block {
    /// The statements between the braces, broken text left out.
    pub fn statements(&self) -> AstChildren<Statement> {
        self.children()
    }

    /// The opening brace.
    pub fn left_brace(&self) -> Option<SyntaxToken> {
        self.token(K::LeftBrace)
    }

    /// The closing brace.
    pub fn right_brace(&self) -> Option<SyntaxToken> {
        self.token(K::RightBrace)
    }
}
