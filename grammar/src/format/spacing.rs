//! Spaces between the tokens of one line.

use crate::kind::{SyntaxKind as K, SyntaxToken};

/// The space between two tokens on a line.
pub(super) fn between(before: &SyntaxToken, next: &SyntaxToken) -> &'static str {
    let parent = |token: &SyntaxToken| token.parent().map_or(K::Root, |node| node.kind());
    let (outer, inner) = (parent(before), parent(next));
    let tight = match (before.kind(), next.kind()) {
        (_, K::Semicolon | K::Comma | K::RightParen | K::RightBracket) => true,
        (K::LeftParen | K::LeftBracket, _) => true,
        (K::Colon, _) | (_, K::Colon) => true,
        (K::LeftBrace, _) => is_list(outer),
        (_, K::RightBrace) => is_list(inner),
        (K::Minus | K::Bang | K::Tilde, _) if outer == K::UnaryExpression => true,
        (_, K::LeftParen) => belongs_to_word(inner),
        (_, K::LeftBracket) => inner != K::ForStatement,
        _ => false,
    };
    if tight { "" } else { " " }
}

/// Braces around values, as opposed to statements.
fn is_list(kind: K) -> bool {
    matches!(kind, K::ArrayLiteral | K::SetExpression)
}

/// Whether a parenthesis in this node follows its word without a space.
fn belongs_to_word(kind: K) -> bool {
    matches!(
        kind,
        K::ArgumentList
            | K::ParameterList
            | K::SignatureList
            | K::CastExpression
            | K::Modifier
            | K::DurationofExpression
    )
}
