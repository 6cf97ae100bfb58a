//! Views of what a file declares: version, includes, gates, subroutines,
//! variables, and the annotations before them.

use super::*;
use SyntaxKind as K;
use rowan::TextSize;

nodes! {
    /// `OPENQASM 3.0;`
    VersionStatement;
    /// `include "path";`
    IncludeStatement;
    /// `defcalgrammar "name";`
    CalibrationGrammar;
    /// `pragma` and the rest of its line.
    Pragma;
    /// `@name` and the rest of its line.
    Annotation;
    /// `qubit q;` or `qubit[n] q;`
    QubitDeclaration;
    /// `qreg q[n];` or `creg c[n];`
    OldDeclaration;
    /// A scalar or array variable, with or without an initialiser.
    ClassicalDeclaration;
    /// `const TYPE name = value;`
    ConstDeclaration;
    /// `input TYPE name;` or `output TYPE name;`
    IoDeclaration;
    /// `let name = value;`
    AliasDeclaration;
    /// `gate name(params) operands { … }`
    GateDefinition;
    /// `opaque name(params) operands;` of a version 2 file.
    OpaqueDeclaration;
    /// `def name(parameters) -> TYPE { … }`
    SubroutineDefinition;
    /// `extern name(types) -> TYPE;`
    ExternDeclaration;
    /// `cal { … }`
    CalStatement;
    /// `defcal name(…) operands { … }`
    DefcalStatement;
    /// The names between the parentheses of a gate definition.
    ParameterList;
    /// The operand names of a gate definition.
    OperandNames;
    /// The parameters of a subroutine or an extern.
    SignatureList;
    /// One parameter of a subroutine or an extern.
    SignatureParameter;
    /// `-> TYPE`
    ReturnSignature;
}

/// Gives the declared name to views that have one.
macro_rules! named {
    ($($view:ident)*) => {
        $(impl $view {
            /// The declared name.
            pub fn name(&self) -> Option<Name> {
                self.child()
            }
        })*
    };
}

named! {
    QubitDeclaration OldDeclaration ClassicalDeclaration ConstDeclaration IoDeclaration
    AliasDeclaration GateDefinition OpaqueDeclaration SubroutineDefinition ExternDeclaration
    DefcalStatement SignatureParameter
}

impl VersionStatement {
    /// The number after `OPENQASM`, such as `3.0` or `3`.
    pub fn number(&self) -> Option<SyntaxToken> {
        self.token(K::VersionNumber)
    }
}

impl IncludeStatement {
    /// The path with its quotes.
    pub fn path_token(&self) -> Option<SyntaxToken> {
        self.token(K::StringLiteral)
    }

    /// The path without its quotes.
    pub fn path(&self) -> Option<String> {
        let token = self.path_token()?;
        Some(token.text().trim_matches(['"', '\'']).to_owned())
    }
}

impl Pragma {
    /// The rest of the line after the keyword and the blanks behind it.
    pub fn content(&self) -> Option<SyntaxToken> {
        self.token(K::RestOfLine)
    }
}

impl Annotation {
    /// The name with its `@`, as written.
    pub fn name_token(&self) -> Option<SyntaxToken> {
        self.token(K::AnnotationName)
    }

    /// The name without its `@`, such as `cantle.dense`.
    pub fn name(&self) -> String {
        let token = self.name_token();
        token.map_or_else(String::new, |token| token.text().trim_start_matches('@').to_owned())
    }

    /// The rest of the line, raw, from its first character that is no blank;
    /// none if nothing follows the name. Blanks at its end are part of it.
    pub fn content(&self) -> Option<SyntaxToken> {
        self.token(K::RestOfLine)
    }
}

impl QubitDeclaration {
    /// `qubit` with its size.
    pub fn qubit_type(&self) -> Option<QubitType> {
        self.child()
    }
}

impl OldDeclaration {
    /// `qreg` or `creg`.
    pub fn keyword(&self) -> Option<SyntaxToken> {
        self.token_of(&[K::QregKw, K::CregKw])
    }

    /// Whether this declares qubits.
    pub fn is_quantum(&self) -> bool {
        self.token(K::QregKw).is_some()
    }

    /// The size in brackets after the name.
    pub fn designator(&self) -> Option<Designator> {
        self.child()
    }
}

impl ClassicalDeclaration {
    /// The declared type.
    pub fn ty(&self) -> Option<Type> {
        self.child()
    }

    /// The `=` before the initialiser.
    pub fn equals(&self) -> Option<SyntaxToken> {
        self.token(K::Equals)
    }

    /// The initialiser; an array literal only for arrays.
    pub fn value(&self) -> Option<Initialiser> {
        self.child()
    }
}

impl ConstDeclaration {
    /// The declared type.
    pub fn ty(&self) -> Option<Type> {
        self.child()
    }

    /// The value.
    pub fn value(&self) -> Option<Initialiser> {
        self.child()
    }
}

impl IoDeclaration {
    /// Whether this is an `input`.
    pub fn is_input(&self) -> bool {
        self.token(K::InputKw).is_some()
    }

    /// The declared type.
    pub fn ty(&self) -> Option<Type> {
        self.child()
    }
}

impl AliasDeclaration {
    /// What the name stands for: one expression, or a concatenation.
    pub fn value(&self) -> Option<Expression> {
        self.child()
    }
}

impl GateDefinition {
    /// The list of classical parameters, if there are parentheses.
    pub fn parameter_list(&self) -> Option<ParameterList> {
        self.child()
    }

    /// The names of the classical parameters.
    pub fn parameters(&self) -> Vec<Name> {
        self.parameter_list().map_or_else(Vec::new, |list| list.names().collect())
    }

    /// The list of operands.
    pub fn operand_names(&self) -> Option<OperandNames> {
        self.child()
    }

    /// The names of the operands.
    pub fn operands(&self) -> Vec<Name> {
        self.operand_names().map_or_else(Vec::new, |list| list.names().collect())
    }

    /// The body in braces.
    pub fn body(&self) -> Option<Block> {
        self.child()
    }

    /// The keyword `gate`, where the definition begins after its annotations.
    pub fn keyword(&self) -> Option<SyntaxToken> {
        self.token(K::GateKw)
    }

    /// The place just behind the last operand: the end of the head, before the
    /// white space that leads to the body. Without operands, the end of what
    /// is there of the head.
    pub fn head_end(&self) -> TextSize {
        head_end(&self.0, self.body())
    }
}

impl OpaqueDeclaration {
    /// The names of the classical parameters.
    pub fn parameters(&self) -> Vec<Name> {
        self.child::<ParameterList>().map_or_else(Vec::new, |list| list.names().collect())
    }

    /// The names of the operands.
    pub fn operands(&self) -> Vec<Name> {
        self.child::<OperandNames>().map_or_else(Vec::new, |list| list.names().collect())
    }
}

impl ParameterList {
    /// The names in the list.
    pub fn names(&self) -> AstChildren<Name> {
        self.children()
    }
}

impl OperandNames {
    /// The names in the list.
    pub fn names(&self) -> AstChildren<Name> {
        self.children()
    }
}

impl SubroutineDefinition {
    /// The parameters, in order.
    pub fn parameters(&self) -> Vec<SignatureParameter> {
        self.child::<SignatureList>().map_or_else(Vec::new, |list| list.parameters().collect())
    }

    /// The type after the arrow.
    pub fn return_type(&self) -> Option<ScalarType> {
        self.child::<ReturnSignature>()?.ty()
    }

    /// The body in braces.
    pub fn body(&self) -> Option<Block> {
        self.child()
    }

    /// The place just behind the head, before the white space that leads to
    /// the body.
    pub fn head_end(&self) -> TextSize {
        head_end(&self.0, self.body())
    }
}

impl ExternDeclaration {
    /// The list of parameter types; the standard's text lets it be left out.
    pub fn signature(&self) -> Option<SignatureList> {
        self.child()
    }

    /// The type after the arrow.
    pub fn return_type(&self) -> Option<ScalarType> {
        self.child::<ReturnSignature>()?.ty()
    }
}

impl SignatureList {
    /// The parameters in the list.
    pub fn parameters(&self) -> AstChildren<SignatureParameter> {
        self.children()
    }
}

impl SignatureParameter {
    /// The type of the parameter.
    pub fn ty(&self) -> Option<Type> {
        self.child()
    }

    /// The size in brackets after the name, of a `qreg` or `creg` parameter.
    pub fn designator(&self) -> Option<Designator> {
        self.child()
    }
}

impl ReturnSignature {
    /// The type after the arrow.
    pub fn ty(&self) -> Option<ScalarType> {
        self.child()
    }
}

impl CalStatement {
    /// What stands between the braces, raw.
    pub fn content(&self) -> Option<SyntaxToken> {
        self.token(K::CalibrationBody)
    }
}

impl DefcalStatement {
    /// What stands between the braces, raw.
    pub fn content(&self) -> Option<SyntaxToken> {
        self.token(K::CalibrationBody)
    }
}

/// The end of what stands in a definition before its body.
fn head_end(definition: &SyntaxNode, body: Option<Block>) -> TextSize {
    let last = match &body {
        Some(body) => body.syntax().prev_sibling_or_token(),
        None => definition.last_child_or_token(),
    };
    let skip = |element: &crate::SyntaxElement| {
        element.kind().is_trivia() || element.text_range().is_empty()
    };
    let mut before = last;
    while let Some(element) = before.clone().filter(skip) {
        before = element.prev_sibling_or_token();
    }
    before.map_or(definition.text_range().start(), |element| element.text_range().end())
}
