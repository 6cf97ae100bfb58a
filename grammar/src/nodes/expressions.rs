//! Views of expressions, and of what stands in their place: ranges, sets,
//! array literals, measurements.

use super::*;
use SyntaxKind as K;

nodes! {
    /// A literal value, or a hardware qubit used as a value.
    Literal;
    /// `(value)`
    ParenExpression;
    /// `-a`, `!a` or `~a`
    UnaryExpression;
    /// Two values and the operator between them.
    BinaryExpression;
    /// A value and one index operator.
    IndexExpression;
    /// `name(arguments)`
    CallExpression;
    /// `TYPE(value)`
    CastExpression;
    /// `durationof({ … })`
    DurationofExpression;
    /// `measure operand`
    MeasureExpression;
    /// `name(…) operands` as a value: a calibrated measurement.
    MeasureCall;
    /// `a ++ b ++ c`
    ConcatExpression;
    /// `[…]` after what is indexed.
    IndexOperator;
    /// `start:step:stop`, each optional.
    RangeExpression;
    /// `{a, b, c}` as a set of values.
    SetExpression;
    /// `{…}` as the value of an array.
    ArrayLiteral;
}

choice! {
    /// Any expression with one value. A measurement, a range and an array
    /// literal are none.
    Expression {
        /// See [`Literal`].
        Literal(Literal),
        /// See [`NameRef`].
        Name(NameRef),
        /// See [`ParenExpression`].
        Paren(ParenExpression),
        /// See [`UnaryExpression`].
        Unary(UnaryExpression),
        /// See [`BinaryExpression`].
        Binary(BinaryExpression),
        /// See [`IndexExpression`].
        Index(IndexExpression),
        /// See [`CallExpression`].
        Call(CallExpression),
        /// See [`CastExpression`].
        Cast(CastExpression),
        /// See [`DurationofExpression`].
        Durationof(DurationofExpression),
        /// See [`ConcatExpression`].
        Concat(ConcatExpression),
    }
}

choice! {
    /// What may stand after `=` or `return`.
    Initialiser {
        /// An expression.
        Expression(Expression),
        /// `{…}`, the value of an array.
        Array(ArrayLiteral),
        /// `measure operand`
        Measure(MeasureExpression),
        /// A calibrated measurement.
        MeasureCall(MeasureCall),
    }
}

choice! {
    /// What a `for` runs over.
    Iterated {
        /// `[start:step:stop]`
        Range(RangeExpression),
        /// `{a, b, c}`
        Set(SetExpression),
        /// Any other expression.
        Expression(Expression),
    }
}

choice! {
    /// One index between the brackets of an index operator.
    IndexItem {
        /// `start:step:stop`
        Range(RangeExpression),
        /// `{a, b, c}`, then the only one.
        Set(SetExpression),
        /// A single index.
        Expression(Expression),
    }
}

choice! {
    /// An element of an array literal.
    Element {
        /// A nested row.
        Row(ArrayLiteral),
        /// An entry.
        Expression(Expression),
    }
}

impl ParenExpression {
    /// The value between the parentheses.
    pub fn inner(&self) -> Option<Expression> {
        self.child()
    }
}

impl UnaryExpression {
    /// The operator.
    pub fn operator(&self) -> Option<SyntaxToken> {
        self.token_of(&[K::Minus, K::Bang, K::Tilde])
    }

    /// The operand.
    pub fn operand(&self) -> Option<Expression> {
        self.child()
    }
}

impl BinaryExpression {
    /// The operator: the only sign (or `in`) directly in the node.
    pub fn operator(&self) -> Option<SyntaxToken> {
        let tokens = self.syntax().children_with_tokens().filter_map(|child| child.into_token());
        tokens.into_iter().find(|token| !token.kind().is_skipped())
    }

    /// The value on the left.
    pub fn left(&self) -> Option<Expression> {
        self.side(false)
    }

    /// The value on the right; none for `in` before a set.
    pub fn right(&self) -> Option<Expression> {
        self.side(true)
    }

    /// The set to the right of `in`.
    pub fn set(&self) -> Option<SetExpression> {
        self.child()
    }

    fn side(&self, right: bool) -> Option<Expression> {
        let middle = self.operator()?.text_range().start();
        self.children::<Expression>().find(|side| (side.range().start() > middle) == right)
    }
}

impl IndexExpression {
    /// What is indexed.
    pub fn base(&self) -> Option<Expression> {
        self.child()
    }

    /// The index operator.
    pub fn index(&self) -> Option<IndexOperator> {
        self.child()
    }
}

impl IndexOperator {
    /// The indices between the brackets.
    pub fn items(&self) -> AstChildren<IndexItem> {
        self.children()
    }
}

impl RangeExpression {
    /// The start, if written.
    pub fn start(&self) -> Option<Expression> {
        self.part(0)
    }

    /// The step, if written; it stands between two colons.
    pub fn step(&self) -> Option<Expression> {
        if self.colons() < 2 { None } else { self.part(1) }
    }

    /// The end, which the range includes, if written.
    pub fn stop(&self) -> Option<Expression> {
        self.part(self.colons().max(1))
    }

    fn colons(&self) -> usize {
        self.syntax().children_with_tokens().filter(|child| child.kind() == K::Colon).count()
    }

    /// The expression after this many colons.
    fn part(&self, after: usize) -> Option<Expression> {
        let mut colons = 0;
        for child in self.syntax().children_with_tokens() {
            colons += usize::from(child.kind() == K::Colon);
            if colons == after
                && let Some(found) = child.into_node().and_then(Expression::cast)
            {
                return Some(found);
            }
        }
        None
    }
}

impl SetExpression {
    /// The values of the set.
    pub fn values(&self) -> AstChildren<Expression> {
        self.children()
    }
}

impl ArrayLiteral {
    /// The rows or entries.
    pub fn elements(&self) -> AstChildren<Element> {
        self.children()
    }
}

impl CallExpression {
    /// The name of the function.
    pub fn name(&self) -> Option<NameRef> {
        self.child()
    }

    /// The list of arguments.
    pub fn argument_list(&self) -> Option<ArgumentList> {
        self.child()
    }

    /// The arguments.
    pub fn arguments(&self) -> Vec<Expression> {
        self.argument_list().map_or_else(Vec::new, |list| list.arguments().collect())
    }
}

impl CastExpression {
    /// The type to cast to.
    pub fn ty(&self) -> Option<Type> {
        self.child()
    }

    /// The value that is cast.
    pub fn value(&self) -> Option<Expression> {
        self.child()
    }
}

impl DurationofExpression {
    /// The statements whose duration is meant.
    pub fn body(&self) -> Option<Block> {
        self.child()
    }
}

impl MeasureExpression {
    /// What is measured.
    pub fn operand(&self) -> Option<Operand> {
        self.child()
    }
}

impl MeasureCall {
    /// The name of the calibration, or its call with arguments.
    pub fn callee(&self) -> Option<Expression> {
        self.child()
    }

    /// The operands, in order.
    pub fn operands(&self) -> Vec<Operand> {
        self.child::<OperandList>().map_or_else(Vec::new, |list| list.operands().collect())
    }
}

impl ConcatExpression {
    /// The terms between the `++`.
    pub fn terms(&self) -> AstChildren<Expression> {
        self.children()
    }
}
