//! The standard's keywords, and which items a mode or a technique brings with it.

use std::fmt;

use super::carrier::Keyword;

macro_rules! keywords {
    (
        $(#[$about:meta])* $name:ident
        { $(#[$first_doc:meta])* $first:ident = $first_word:literal
          $(, $(#[$doc:meta])* $other:ident = $word:literal)* $(,)? }
    ) => {
        $(#[$about])*
        #[derive(Debug, Clone, Copy, PartialEq, Eq, Hash, Default)]
        pub enum $name {
            $(#[$first_doc])* #[default] $first,
            $($(#[$doc])* $other,)*
        }

        impl Keyword for $name {
            const ALL: &'static [Self] = &[Self::$first $(, Self::$other)*];

            fn word(self) -> &'static str {
                match self { Self::$first => $first_word, $(Self::$other => $word,)* }
            }
        }

        impl fmt::Display for $name {
            fn fmt(&self, f: &mut fmt::Formatter<'_>) -> fmt::Result {
                f.write_str(self.word())
            }
        }
    };
}

keywords! {
    /// The first line.
    FormatIdentifier {
        /// The only one.
        Only = "VAMAS Surface Chemical Analysis Standard Data Transfer Format 1988 May 4",
    }
}

keywords! {
    /// What the blocks of an experiment make up together.
    ExperimentMode {
        /// Independent data, or data for single values of the experimental variables.
        Norm = "NORM",
        /// A spectrum at each position of a map.
        Map = "MAP",
        /// A spectrum at each position of a map, at each depth of a profile.
        MapDp = "MAPDP",
        /// A single value at each position of a map.
        MapSv = "MAPSV",
        /// A single value at each position of a map, at each depth of a profile.
        MapSvDp = "MAPSVDP",
        /// A spectrum at each depth of a profile.
        Sdp = "SDP",
        /// A single value at each depth of a profile.
        SdpSv = "SDPSV",
        /// An electron micrograph.
        Sem = "SEM",
    }
}

keywords! {
    /// How the abscissa of a block is given.
    ScanMode {
        /// By its start and its increment.
        Regular = "REGULAR",
        /// Value by value, as the first corresponding variable.
        Irregular = "IRREGULAR",
        /// The values are a map, line by line.
        Mapping = "MAPPING",
    }
}

keywords! {
    /// How a block was measured.
    Technique {
        /// X-ray photoelectron spectroscopy.
        Xps = "XPS",
        /// Ultraviolet photoelectron spectroscopy.
        Ups = "UPS",
        /// Auger electron spectroscopy, differentiated.
        AesDiff = "AES diff",
        /// Auger electron spectroscopy, direct.
        AesDir = "AES dir",
        /// Energy-dispersive X-ray spectroscopy.
        Edx = "EDX",
        /// Electron energy loss spectroscopy.
        Els = "ELS",
        /// Fast atom bombardment mass spectrometry.
        Fabms = "FABMS",
        /// The energy spectrum of fast atom bombardment mass spectrometry.
        FabmsEnergy = "FABMS energy spec",
        /// Ion scattering spectroscopy.
        Iss = "ISS",
        /// Secondary ion mass spectrometry.
        Sims = "SIMS",
        /// The energy spectrum of secondary ion mass spectrometry.
        SimsEnergy = "SIMS energy spec",
        /// Sputtered neutral mass spectrometry.
        Snms = "SNMS",
        /// The energy spectrum of sputtered neutral mass spectrometry.
        SnmsEnergy = "SNMS energy spec",
        /// X-ray fluorescence.
        Xrf = "XRF",
    }
}

keywords! {
    /// How the analyser is driven.
    AnalyserMode {
        /// Fixed analyser transmission: constant pass energy.
        Fat = "FAT",
        /// Fixed retarding ratio.
        Frr = "FRR",
        /// Constant mass resolution.
        ConstantDeltaM = "constant delta m",
        /// Constant relative mass resolution.
        ConstantRelative = "constant m/delta m",
    }
}

keywords! {
    /// How the signal is taken.
    SignalMode {
        /// As a current or a voltage.
        Analogue = "analogue",
        /// Pulse by pulse.
        PulseCounting = "pulse counting",
    }
}

keywords! {
    /// How a sputtering source runs.
    SputterMode {
        /// While measuring.
        Continuous = "continuous",
        /// Between measurements.
        Cyclic = "cyclic",
    }
}

impl ExperimentMode {
    /// Whether the number of spectral regions is given (item 10).
    pub(super) fn has_spectral_regions(self) -> bool {
        matches!(self, Self::Map | Self::MapDp | Self::Norm | Self::Sdp)
    }

    /// Whether a spectrum belongs to a position (item 11, item 10 of a block).
    pub(super) fn has_positions(self) -> bool {
        matches!(self, Self::Map | Self::MapDp)
    }

    /// Whether the values are an image (item 18 of a block).
    pub(super) fn has_linescans(self) -> bool {
        matches!(self, Self::MapSv | Self::MapSvDp | Self::Sem)
    }

    /// Whether there is a field of view (item 17 of a block).
    pub(super) fn has_field_of_view(self) -> bool {
        self.has_positions() || self.has_linescans()
    }

    /// Whether the surface is sputtered away between blocks.
    pub(super) fn is_depth_profile(self) -> bool {
        matches!(self, Self::MapDp | Self::MapSvDp | Self::Sdp | Self::SdpSv)
    }
}

impl Technique {
    /// Whether ions or atoms are what the technique itself sends to the surface.
    fn sputters(self) -> bool {
        matches!(
            self,
            Self::Fabms
                | Self::FabmsEnergy
                | Self::Iss
                | Self::Sims
                | Self::SimsEnergy
                | Self::Snms
                | Self::SnmsEnergy
        )
    }

    /// Whether the sputtering particle is given (item 13 of a block).
    pub(super) fn has_particle(self, mode: ExperimentMode) -> bool {
        mode.is_depth_profile() || self.sputters()
    }

    /// Whether a sputtering source beside the analysis source is given (item 37 of a block).
    pub(super) fn has_sputter_source(self, mode: ExperimentMode) -> bool {
        mode.is_depth_profile() && !self.sputters()
    }

    /// Whether photoelectrons are measured.
    pub(super) fn is_photoemission(self) -> bool {
        matches!(self, Self::Ups | Self::Xps)
    }
}
