#!/usr/bin/perl
# How thick must the insulation of a hot duct wall be, so that its casing stays at 50 degC? From Perl, through its foreign-function
# interface (Debian: libffi-platypus-perl). Values cross the border as structs; an invented plant.
use strict;
use warnings;
use FFI::Platypus 2.00;

package Value { use FFI::Platypus::Record; record_layout_1(qw(sint32 kind sint32 reserved double number opaque object)); }
package Frame { use FFI::Platypus::Record; record_layout_1(qw(sint32 kind sint32 reserved double size)); }

my $ffi = FFI::Platypus->new(api => 2, lib => $ENV{TEPOR_LIBRARY} // 'libtepor.so.1');
$ffi->type('record(Value)' => 'value');
$ffi->type('record(Frame)' => 'frame');
my %made;
sub declare { my ($name, @types) = @_; $made{$name} = $ffi->function("tepor_$name" => [@types[0 .. $#types - 1]] => $types[-1]) }
sub plain { $made{$_[0]}->call(@_[1 .. $#_]) }
my $session = declare('session_create', 'opaque')->call;
declare('session_message', 'opaque', 'string');
sub must { my $name = shift; plain($name, $session, @_) and die plain('session_message', $session), "\n" }
sub create { my $name = shift; my $handle; must($name, @_, \$handle); $handle }

declare(@$_) for ['number', 'double', 'value'], ['of', 'opaque', 'value'], ['by', 'opaque', 'value'], ['nothing', 'value'],
    ['planar', 'double', 'frame'], ['parameter_create', 'opaque', 'string', 'double', 'opaque*', 'int'],
    ['table_create', 'opaque', 'double[]', 'double[]', 'size_t', 'sint32', 'opaque*', 'int'],
    ['layers_create', 'opaque', 'int', 'opaque', 'size_t', 'frame', 'value', 'opaque*', 'int'],
    ['body_create', 'opaque', 'opaque', 'sint32', 'opaque*', 'int'],
    ['body_in_material', 'opaque', 'opaque', 'string', 'value', 'value', 'value', 'int'],
    ['body_on_film', 'opaque', 'opaque', 'string', 'value', 'value', 'int'],
    ['body_on_radiation', 'opaque', 'opaque', 'string', 'value', 'value', 'int'],
    ['quantity_mean_on', 'opaque', 'string', 'opaque*', 'int'], ['quantity_heat_out_through', 'opaque', 'string', 'opaque*', 'int'],
    ['size_for', ('opaque') x 4, 'int', 'double', 'opaque', 'opaque', 'opaque*', 'int'],
    ['field_value', 'opaque', 'opaque', 'opaque', 'double*', 'int'], ['balance_text', 'opaque', 'opaque', 'opaque*', 'int'],
    ['text_data', 'opaque', 'string'];
sub number { plain('number', $_[0]) }

my $thickness = create('parameter_create', 'insulation thickness', 0.05);    # m
my $k = create('table_create', [20, 200, 400], [0.038, 0.062, 0.105], 3, 0);    # W/(m K) over degC
my @names = ('steel', 'insulation', 'casing');    # a layer in memory: name, value (kind, number, object), cells, grading
my $layers = pack 'p l l d Q q d p l l d Q q d p l l d Q q d',
    $names[0], 1, 0, 0.004, 0, 1, 0, $names[1], 2, 0, 0, $thickness, 8, 0, $names[2], 1, 0, 0.001, 0, 1, 0;
my $address = unpack 'Q', pack 'P', $layers;
my $wall = create('body_create', create('layers_create', 12, $address, 3, plain('planar', 1), plain('nothing')), 0);
my $none = plain('nothing');
must('body_in_material', $wall, @$_, $none, $none) for ['steel', number(45)], ['insulation', plain('by', $k)], ['casing', number(200)];
must('body_on_film', $wall, 'inner', number(40), number(320));    # W/(m2 K), degC of the gas
must('body_on_film', $wall, 'outer', number(6), number(30));
must('body_on_radiation', $wall, 'outer', number(0.25), number(30));

my ($casing, $loss) = (create('quantity_mean_on', 'outer'), create('quantity_heat_out_through', 'outer'));
my $options = pack 'Q d d d d l l q', 56, 0.01, 0.6, 1e-8, 1e-3, 0, 0, 100;    # between 10 and 600 mm
my $sized = pack 'Q d d d q l l d d d8', 128, (0) x 16;
my $field;
must('size_for', $wall, $thickness, $casing, 1, 50, unpack('Q', pack 'P', $options), unpack('Q', pack 'P', $sized), \$field);
my (undef, $found, $reached, undef, $solves) = unpack 'Q d d d q', $sized;
my $watts;
must('field_value', $field, $loss, \$watts);
printf "insulation thickness  %8.1f mm   (%d solves)\ncasing                %8.2f degC\nloss                  %8.1f W/m2\n",
    1000 * $found, $solves, $reached, $watts;
print plain('text_data', create('balance_text', $field));
print "Caution: whether a surface may be touched is decided by local rules and licensed practice, not by this number.\n";
