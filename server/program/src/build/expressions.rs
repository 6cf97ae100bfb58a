//! Expressions, types and operands.

use grammar::nodes::{
    AstNode, Designator, Expression, IndexItem, IndexOperator, Literal, LiteralValue, NodeExt,
    Operand as OperandNode, RangeExpression, ScalarType, SetExpression, TimeUnit, Type as TypeNode,
};
use grammar::{SyntaxKind as K, TextRange};

use super::Builder;
use crate::arithmetic::{BinaryOp, UnaryOp};
use crate::functions::FUNCTIONS;
use crate::hir::{Expr, ExprKind, Index, Operand, OperandBase};
use crate::symbols::SymbolKind;
use crate::types::{Type, WIDEST};
use crate::value::{Int, Time, Value};
use operator::C64;

/// The kinds of names that have a classical value.
const VALUES: [SymbolKind; 5] = [
    SymbolKind::Constant,
    SymbolKind::Variable,
    SymbolKind::Parameter,
    SymbolKind::LoopVariable,
    SymbolKind::Io,
];

/// The kinds of names that stand for qubits.
pub(super) const QUBITS: [SymbolKind; 3] =
    [SymbolKind::Qubit, SymbolKind::Alias, SymbolKind::Operand];

impl Builder<'_> {
    /// An expression with its names resolved.
    pub(super) fn expression(&mut self, node: &Expression) -> Expr {
        let range = node.range();
        let kind = self.deeper(range, |this| this.expression_kind(node));
        Expr { range, kind: kind.unwrap_or(ExprKind::Broken) }
    }

    /// An expression that may be missing from a broken file.
    pub(super) fn maybe(&mut self, node: Option<Expression>, range: TextRange) -> Expr {
        match node {
            Some(node) => self.expression(&node),
            None => Expr { range, kind: ExprKind::Broken },
        }
    }

    fn expression_kind(&mut self, node: &Expression) -> ExprKind {
        let range = node.range();
        match node {
            Expression::Literal(literal) => self.literal(literal),
            Expression::Name(name) => match self.resolve(name, &VALUES) {
                Some(id) if VALUES.contains(&self.facts.symbols[id.index()].kind) => {
                    ExprKind::Name(id)
                }
                Some(id) => {
                    let symbol = &self.facts.symbols[id.index()];
                    let message = format!("`{}` has no value here", symbol.name);
                    if symbol.kind == SymbolKind::Matrix {
                        ExprKind::Value(Value::Unknown("an array"))
                    } else {
                        self.error("type-mismatch", range, message);
                        ExprKind::Broken
                    }
                }
                None => ExprKind::Broken,
            },
            Expression::Paren(paren) => self.maybe(paren.inner(), range).kind,
            Expression::Unary(unary) => {
                let op = match unary.operator().map(|token| token.kind()) {
                    Some(K::Minus) => UnaryOp::Negate,
                    Some(K::Bang) => UnaryOp::Not,
                    Some(K::Tilde) => UnaryOp::BitNot,
                    _ => return ExprKind::Broken,
                };
                ExprKind::Unary(op, Box::new(self.maybe(unary.operand(), range)))
            }
            Expression::Binary(_) => self.chain(node),
            Expression::Index(index) => {
                let base = self.maybe(index.base(), range);
                let items = index.index().map_or_else(Vec::new, |index| self.indices(&index));
                ExprKind::Index(Box::new(base), items)
            }
            Expression::Call(call) => self.call_expression(call),
            Expression::Cast(cast) => {
                let ty = cast.ty().map_or(Type::Unknown, |ty| self.any_type(&ty));
                ExprKind::Cast(ty, Box::new(self.maybe(cast.value(), range)))
            }
            Expression::Durationof(_) => ExprKind::Value(Value::Unknown("the duration of a block")),
            Expression::Concat(concat) => {
                ExprKind::Concat(concat.terms().map(|term| self.expression(&term)).collect())
            }
        }
    }

    /// The left spine of nested binary operators, as one flat chain.
    fn chain(&mut self, node: &Expression) -> ExprKind {
        let mut spine = Vec::new();
        let mut at = node.clone();
        while let Expression::Binary(binary) = &at {
            let Some(op) = binary.operator().and_then(|token| binary_op(token.kind())) else {
                return ExprKind::Value(Value::Unknown("a test of membership"));
            };
            spine.push((op, binary.right()));
            match binary.left() {
                Some(left) => at = left,
                None => return ExprKind::Broken,
            }
        }
        let first = self.expression(&at);
        let mut rest = Vec::with_capacity(spine.len());
        for (op, right) in spine.into_iter().rev() {
            rest.push((op, self.maybe(right, node.range())));
        }
        ExprKind::Chain(Box::new(first), rest)
    }

    fn literal(&mut self, literal: &Literal) -> ExprKind {
        let range = literal.range();
        let value = match literal.value() {
            Some(LiteralValue::Integer(value)) => match value.map(i128::try_from) {
                Some(Ok(value)) if value <= i128::from(i64::MAX) => Value::int(value),
                Some(Ok(value)) if value <= i128::from(u64::MAX) => {
                    Value::Int(Int::wrapped(value, WIDEST, false))
                }
                _ => {
                    let message = format!("this integer needs more than {WIDEST} bits");
                    self.error("limit-reached", range, message);
                    return ExprKind::Broken;
                }
            },
            Some(LiteralValue::Float(x)) => Value::Float(x),
            Some(LiteralValue::Imaginary(x)) => Value::Complex(C64::new(0.0, x)),
            Some(LiteralValue::Bool(bit)) => Value::Bool(bit),
            Some(LiteralValue::Bits(bits)) => Value::Bits(bits.into_iter().rev().collect()),
            Some(LiteralValue::Timing(t, unit)) => Value::Duration(time(t, unit)),
            Some(LiteralValue::HardwareQubit(_)) => {
                self.error("type-mismatch", range, "a qubit has no value");
                return ExprKind::Broken;
            }
            None => return ExprKind::Broken,
        };
        ExprKind::Value(value)
    }

    fn call_expression(&mut self, call: &grammar::nodes::CallExpression) -> ExprKind {
        let range = call.range();
        let Some(name) = call.name() else { return ExprKind::Broken };
        if name.name() == "sizeof" && self.find("sizeof").is_none() {
            return ExprKind::Value(Value::Unknown("the size of an array"));
        }
        let wanted = [SymbolKind::Function, SymbolKind::Subroutine, SymbolKind::Extern];
        let Some(id) = self.resolve(&name, &wanted) else { return ExprKind::Broken };
        let symbol = self.facts.symbols[id.index()].clone();
        match symbol.kind {
            SymbolKind::Function => {}
            SymbolKind::Subroutine | SymbolKind::Extern => {
                self.calls_seen += 1;
                self.subroutine_arguments(call);
                return ExprKind::Value(Value::Unknown("the result of a subroutine"));
            }
            _ => {
                let message = format!("`{}` is no function", symbol.name);
                self.error("type-mismatch", name.range(), message);
                return ExprKind::Broken;
            }
        }
        let arguments: Vec<Expr> = call.arguments().iter().map(|a| self.expression(a)).collect();
        let entry = FUNCTIONS.iter().find(|(known, ..)| *known == symbol.name);
        let Some((_, function, count)) = entry else { return ExprKind::Broken };
        if arguments.len() != *count {
            let message =
                format!("`{}` takes {}", symbol.name, super::gates::counted(*count, "argument"));
            self.error("parameter-count", range, message);
            return ExprKind::Broken;
        }
        ExprKind::Call(*function, arguments)
    }

    /// Resolves the arguments of a subroutine call, which may be qubits.
    fn subroutine_arguments(&mut self, call: &grammar::nodes::CallExpression) {
        for argument in call.arguments() {
            let name = argument.syntax().descendants().find_map(grammar::nodes::NameRef::cast);
            let found = name.as_ref().and_then(|name| self.find(&name.name()));
            let kind = found.map(|(id, _)| self.facts.symbols[id.index()].kind);
            match kind {
                Some(kind) if QUBITS.contains(&kind) || kind == SymbolKind::Matrix => {
                    if let Some(name) = name {
                        self.resolve(&name, &QUBITS);
                    }
                }
                _ => {
                    self.expression(&argument);
                }
            }
        }
    }

    /// The items of a pair of brackets.
    pub(super) fn indices(&mut self, node: &IndexOperator) -> Vec<Index> {
        let items: Vec<IndexItem> = node.items().collect();
        items
            .iter()
            .map(|item| match item {
                IndexItem::Expression(expr) => Index::One(self.expression(expr)),
                IndexItem::Range(range) => self.range_index(range),
                IndexItem::Set(set) => Index::Set(self.set(set)),
            })
            .collect()
    }

    fn range_index(&mut self, node: &RangeExpression) -> Index {
        let mut part = |expr: Option<Expression>| expr.map(|expr| self.expression(&expr));
        let (start, step, stop) = (part(node.start()), part(node.step()), part(node.stop()));
        Index::Range { range: node.range(), start, step, stop }
    }

    /// The values of a set.
    pub(super) fn set(&mut self, node: &SetExpression) -> Vec<Expr> {
        let values: Vec<Expression> = node.values().collect();
        values.iter().map(|value| self.expression(value)).collect()
    }

    /// An operand of a quantum statement.
    pub(super) fn operand(&mut self, node: &OperandNode) -> Operand {
        let range = node.range();
        let base = match (node.name(), node.hardware_qubit()) {
            (Some(name), _) => match self.resolve(&name, &QUBITS) {
                Some(id) if QUBITS.contains(&self.facts.symbols[id.index()].kind) => {
                    OperandBase::Symbol(id)
                }
                Some(id) => {
                    let name = &self.facts.symbols[id.index()].name;
                    let message = format!("`{name}` is no qubit");
                    self.error("type-mismatch", range, message);
                    OperandBase::Broken
                }
                None => OperandBase::Broken,
            },
            (None, Some(token)) => match token.text()[1..].parse() {
                Ok(number) => OperandBase::Hardware(number),
                Err(_) => OperandBase::Broken,
            },
            (None, None) => OperandBase::Broken,
        };
        let indices: Vec<IndexOperator> = node.indices().collect();
        let indices = indices.iter().map(|index| self.indices(index)).collect();
        Operand { range, base, indices }
    }

    /// A classical type; its width must be a constant.
    pub(super) fn scalar_type(&mut self, node: &ScalarType) -> Type {
        let Some(keyword) = node.keyword() else { return Type::Unknown };
        let width = node.designator().and_then(|d| self.width(&d));
        let broken = node.designator().is_some() && width.is_none();
        if broken && keyword.kind() != K::FloatKw {
            return Type::Unknown;
        }
        let narrow = |width: Option<usize>| width.map_or(WIDEST, |w| w as u32);
        match keyword.kind() {
            K::BoolKw => Type::Bool,
            K::BitKw => width.map_or(Type::Bit, Type::Bits),
            K::IntKw | K::UintKw | K::AngleKw if width.is_some_and(|w| w > WIDEST as usize) => {
                let message =
                    format!("values wider than the limit of {WIDEST} bits are not followed");
                self.error("limit-reached", node.range(), message);
                Type::Unknown
            }
            K::IntKw => Type::Int { width: narrow(width), signed: true },
            K::UintKw => Type::Int { width: narrow(width), signed: false },
            K::AngleKw => Type::Angle(narrow(width)),
            K::FloatKw => Type::Float,
            K::ComplexKw => Type::Complex,
            K::DurationKw | K::StretchKw => Type::Duration,
            _ => Type::Unknown,
        }
    }

    fn width(&mut self, node: &Designator) -> Option<usize> {
        let expr = self.maybe(node.value(), node.range());
        let width = self.constant_size(&expr, "the width of a type")?;
        if width == 0 {
            self.error("type-mismatch", expr.range, "the width of a type must not be zero");
            return None;
        }
        if width > self.facts.limits.qubits {
            let limit = self.facts.limits.qubits;
            let message = format!("{width} bits are past the limit of {limit}");
            self.error("limit-reached", expr.range, message);
            return None;
        }
        Some(width)
    }

    /// Any type as far as scalar values are concerned.
    pub(super) fn any_type(&mut self, node: &TypeNode) -> Type {
        match node {
            TypeNode::Scalar(scalar) => self.scalar_type(scalar),
            TypeNode::Array(array) => {
                if let Some(element) = array.element() {
                    self.scalar_type(&element);
                }
                Type::Unknown
            }
            _ => Type::Unknown,
        }
    }
}

fn time(t: f64, unit: TimeUnit) -> Time {
    match unit {
        TimeUnit::Step => Time::Steps(t),
        TimeUnit::Nano => Time::Seconds(t * 1e-9),
        TimeUnit::Micro => Time::Seconds(t * 1e-6),
        TimeUnit::Milli => Time::Seconds(t * 1e-3),
        TimeUnit::Second => Time::Seconds(t),
    }
}

/// The operator that a sign is between two values.
pub(super) fn binary_op(kind: K) -> Option<BinaryOp> {
    Some(match kind {
        K::StarStar | K::StarStarEquals => BinaryOp::Power,
        K::Star | K::StarEquals => BinaryOp::Multiply,
        K::Slash | K::SlashEquals => BinaryOp::Divide,
        K::Percent | K::PercentEquals => BinaryOp::Remainder,
        K::Plus | K::PlusEquals => BinaryOp::Add,
        K::Minus | K::MinusEquals => BinaryOp::Subtract,
        K::ShiftLeft | K::ShiftLeftEquals => BinaryOp::ShiftLeft,
        K::ShiftRight | K::ShiftRightEquals => BinaryOp::ShiftRight,
        K::Less => BinaryOp::Less,
        K::LessEquals => BinaryOp::LessEqual,
        K::Greater => BinaryOp::Greater,
        K::GreaterEquals => BinaryOp::GreaterEqual,
        K::EqualsEquals => BinaryOp::Equal,
        K::BangEquals => BinaryOp::NotEqual,
        K::Ampersand | K::AmpersandEquals => BinaryOp::BitAnd,
        K::Caret | K::CaretEquals => BinaryOp::BitXor,
        K::Pipe | K::PipeEquals => BinaryOp::BitOr,
        K::AmpersandAmpersand => BinaryOp::And,
        K::PipePipe => BinaryOp::Or,
        _ => return None,
    })
}
