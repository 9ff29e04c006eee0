//! What a parameter set is: sections of numbers, each with its unit and source.

macro_rules! parameter_set {
    ($(#[$about:meta])* $set:ident $(with $($shared:ident: $shared_type:ident),+)? { $($(#[$section_about:meta])* $section:ident: $type:ident { $($key:ident),* $(,)? })* }) => {
        $(#[$about])*
        #[derive(Debug, Clone, PartialEq, Deserialize)]
        #[serde(deny_unknown_fields)]
        pub struct $set {
            /// Name of the set.
            pub name: String,
            /// Where the model was published.
            pub publication: String,
            $($(#[$section_about])* pub $section: $type,)*
            $($(#[doc = "As in every set of its family."] pub $shared: $shared_type,)+)?
        }

        impl $set {
            /// Every number of the set with the key under which it stands.
            pub fn listed(&self) -> Vec<(String, &Sourced)> {
                let own = vec![$($((
                    concat!(stringify!($section), ".", stringify!($key)).to_owned(),
                    &self.$section.$key,
                ),)*)*];
                own.into_iter()
                    $($(.chain(self.$shared.listed(stringify!($shared))))+)?
                    .collect()
            }
        }

        $(
            $(#[$section_about])*
            #[derive(Debug, Clone, PartialEq, Deserialize)]
            #[serde(deny_unknown_fields)]
            #[expect(missing_docs, reason = "each number bears its unit and source in the file")]
            pub struct $type { $(pub $key: Sourced,)* }
        )*
    };
}

macro_rules! shared_section {
    ($(#[$about:meta])* $type:ident { $($key:ident),* $(,)? }) => {
        $(#[$about])*
        #[derive(Debug, Clone, PartialEq, Deserialize)]
        #[serde(deny_unknown_fields)]
        #[expect(missing_docs, reason = "each number bears its unit and source in the file")]
        pub struct $type { $(pub $key: Sourced,)* }

        impl $type {
            fn listed(&self, section: &str) -> Vec<(String, &Sourced)> {
                vec![$((format!("{section}.{}", stringify!($key)), &self.$key),)*]
            }
        }
    };
}
