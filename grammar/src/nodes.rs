//! Typed views of the nodes of the tree.
//!
//! A view holds one node of its kind and finds the parts when asked. A part
//! may be missing in a broken file, so nearly every accessor gives an option;
//! lists give what is there, in the order of the text.

mod expressions;
mod items;
mod literal;
mod statements;
mod types;

pub use expressions::*;
pub use items::*;
pub use literal::*;
pub use rowan::ast::{AstChildren, AstNode};
pub use statements::*;
pub use types::*;

use crate::kind::{OpenQasm, SyntaxKind, SyntaxNode, SyntaxToken};
use rowan::TextRange;

/// Defines views of one kind of node each.
macro_rules! nodes {
    ($($(#[$meta:meta])* $name:ident;)*) => {
        $(
            $(#[$meta])*
            #[derive(Clone, Debug, PartialEq, Eq, Hash)]
            pub struct $name(SyntaxNode);

            impl AstNode for $name {
                type Language = OpenQasm;

                fn can_cast(kind: SyntaxKind) -> bool {
                    kind == SyntaxKind::$name
                }

                fn cast(node: SyntaxNode) -> Option<Self> {
                    Self::can_cast(node.kind()).then_some(Self(node))
                }

                fn syntax(&self) -> &SyntaxNode {
                    &self.0
                }
            }
        )*
    };
}

/// Defines a choice between views.
macro_rules! choice {
    ($(#[$meta:meta])* $name:ident { $($(#[$of:meta])* $variant:ident($view:ident),)* }) => {
        $(#[$meta])*
        #[derive(Clone, Debug, PartialEq, Eq, Hash)]
        pub enum $name {
            $($(#[$of])* $variant($view),)*
        }

        impl AstNode for $name {
            type Language = OpenQasm;

            fn can_cast(kind: SyntaxKind) -> bool {
                false $(|| $view::can_cast(kind))*
            }

            fn cast(node: SyntaxNode) -> Option<Self> {
                $(if $view::can_cast(node.kind()) {
                    return $view::cast(node).map(Self::$variant);
                })*
                None
            }

            fn syntax(&self) -> &SyntaxNode {
                match self {
                    $(Self::$variant(view) => view.syntax(),)*
                }
            }
        }
    };
}

pub(crate) use {choice, nodes};

/// What every view offers besides its own parts.
pub trait NodeExt: AstNode<Language = OpenQasm> {
    /// The bytes of the file that the node covers, without white space and
    /// comments around it.
    fn range(&self) -> TextRange {
        self.syntax().text_range()
    }

    /// The text of the node, comments inside it included.
    fn text(&self) -> String {
        self.syntax().text().to_string()
    }

    /// The annotations before this statement; none for any other node.
    fn annotations(&self) -> AstChildren<Annotation> {
        self.children()
    }

    /// The first child that is such a view.
    fn child<N: AstNode<Language = OpenQasm>>(&self) -> Option<N> {
        rowan::ast::support::child(self.syntax())
    }

    /// The children that are such views.
    fn children<N: AstNode<Language = OpenQasm>>(&self) -> AstChildren<N> {
        rowan::ast::support::children(self.syntax())
    }

    /// The first token of this kind directly in the node.
    fn token(&self, kind: SyntaxKind) -> Option<SyntaxToken> {
        rowan::ast::support::token(self.syntax(), kind)
    }

    /// The first token directly in the node that has one of these kinds.
    fn token_of(&self, kinds: &[SyntaxKind]) -> Option<SyntaxToken> {
        let tokens = self.syntax().children_with_tokens().filter_map(|child| child.into_token());
        tokens.into_iter().find(|token| kinds.contains(&token.kind()))
    }
}

impl<N: AstNode<Language = OpenQasm>> NodeExt for N {}

nodes! {
    /// The whole file.
    Root;
    /// Text that fits no rule.
    ErrorNode;
    /// A name where it is declared.
    Name;
    /// A name where it is used.
    NameRef;
}

impl Root {
    /// The view of a node known to be the root.
    pub(crate) fn new(node: SyntaxNode) -> Self {
        Self(node)
    }

    /// The version line.
    pub fn version(&self) -> Option<VersionStatement> {
        self.child()
    }

    /// The statements of the file, pragmas included, broken text left out.
    pub fn statements(&self) -> AstChildren<Statement> {
        self.children()
    }
}

/// Defines what the two nodes around a name have in common.
macro_rules! name_views {
    ($($name:ident)*) => {
        $(impl $name {
            /// The name itself. After `defcal` this can be one of the keywords
            /// `measure`, `reset` and `delay`.
            pub fn token(&self) -> Option<SyntaxToken> {
                self.0.first_token()
            }

            /// The text of the name.
            pub fn name(&self) -> String {
                self.0.first_token().map_or_else(String::new, |token| token.text().to_owned())
            }
        })*
    };
}

name_views! { Name NameRef }
